import type { PocketDto } from '@shared/contract/areas';
import type { Box, LabelBoxes } from './label-boxes';
import { font, type MapInk } from './map-ink';
import { boundsOf, tracePath } from './paint-areas';
import { onScreen, toWorld, type View, type WorldPoint } from './world';

/** A pocket, projected once, with what its label says. */
export interface PocketShape {
  readonly pocket: Pick<PocketDto, 'key'>;
  readonly points: readonly WorldPoint[];
  readonly label: string;
  readonly shortLabel: string;
}

export const pocketShape = (pocket: PocketDto, label: string): PocketShape => ({
  pocket,
  points: (pocket.hull.length > 0 ? pocket.hull : [pocket.centre]).map(toWorld),
  label,
  shortLabel: `${pocket.callIds.length} calls`,
});

/** A pocket smaller than this on screen shows by its calls alone. */
const LEAST_SIZE_PX = 18;
/** A smaller one has room for how many, but not for what is at stake. */
const WHOLE_LABEL_FROM_PX = 64;

/** Pale within, one line without; the server has left room around the outermost calls. */
export function paintPockets(
  ctx: CanvasRenderingContext2D,
  view: View,
  shapes: readonly PocketShape[],
  chosenKey: string | null,
  ink: MapInk,
): void {
  ctx.lineJoin = 'round';
  for (const shape of shapes) {
    if (!isWorthDrawing(view, shape)) continue;
    const isChosen = shape.pocket.key === chosenKey;
    tracePath(ctx, view, shape.points);
    ctx.fillStyle = ink.accent;
    ctx.globalAlpha = isChosen ? 0.2 : 0.1;
    ctx.fill();
    ctx.globalAlpha = 1;
    ctx.strokeStyle = ink.accent;
    ctx.lineWidth = isChosen ? 3 : 1.25;
    ctx.stroke();
  }
}

const isWorthDrawing = (view: View, { points }: PocketShape): boolean => {
  const { left, top, right, bottom } = boundsOf(points.map((point) => onScreen(view, point)));
  if (right < 0 || bottom < 0 || left > view.width || top > view.height) return false;
  return Math.max(right - left, bottom - top) >= LEAST_SIZE_PX;
};

/** A tag on the pocket's lower edge: how many, what is at stake, until when. */
export function paintPocketLabels(
  ctx: CanvasRenderingContext2D,
  view: View,
  shapes: readonly PocketShape[],
  chosenKey: string | null,
  boxes: LabelBoxes,
  ink: MapInk,
): readonly { readonly pocketKey: string; readonly box: Box }[] {
  const labels: { readonly pocketKey: string; readonly box: Box }[] = [];
  ctx.font = font(11.5, 500);
  ctx.textAlign = 'left';
  ctx.textBaseline = 'middle';
  // Half a tag at the window's edge is not read.
  const window = {
    left: view.margin + 4,
    right: view.width - view.margin - 4,
    // Above the map's foot.
    lowest: view.height - view.margin - 46,
  };
  for (const shape of shapes) {
    if (!isWorthDrawing(view, shape)) continue;
    const bounds = boundsOf(shape.points.map((point) => onScreen(view, point)));
    const middle = (bounds.left + bounds.right) / 2;
    const isChosen = shape.pocket.key === chosenKey;
    const isSmall = bounds.right - bounds.left < WHOLE_LABEL_FROM_PX && !isChosen;
    for (const text of isSmall ? [shape.shortLabel] : [shape.label, shape.shortLabel]) {
      const width = ctx.measureText(text).width + 14;
      const x = Math.max(window.left, Math.min(middle - width / 2, window.right - width));
      const at = (y: number): Box => ({ x, y, width, height: 20 });
      const box = boxes.takeFirst([
        at(Math.min(bounds.bottom - 9, window.lowest)),
        at(bounds.top - 11),
      ]);
      if (!box) continue;
      ctx.fillStyle = isChosen ? ink.accent : ink.raised;
      ctx.strokeStyle = ink.accent;
      ctx.lineWidth = 1.5;
      ctx.beginPath();
      ctx.roundRect(box.x, box.y, box.width, box.height, 4);
      ctx.fill();
      ctx.stroke();
      ctx.fillStyle = isChosen ? ink.onAccent : ink.ink;
      ctx.fillText(text, box.x + 7, box.y + 10.5);
      labels.push({ pocketKey: shape.pocket.key, box });
      break;
    }
  }
  return labels;
}
