import type { Box, LabelBoxes } from './label-boxes';
import { font, inkText, type MapInk } from './map-ink';
import { type AreaShape, boundsOf, type ScreenBounds } from './paint-areas';
import { onScreen, type View, type WorldPoint } from './world';

/** Name and times inside the area, as high as there is room for them in the window. */
export function paintAreaLabels(
  ctx: CanvasRenderingContext2D,
  view: View,
  shapes: readonly AreaShape[],
  boxes: LabelBoxes,
  ink: MapInk,
): readonly { readonly areaId: string; readonly box: Box }[] {
  const labels: { readonly areaId: string; readonly box: Box }[] = [];
  ctx.textAlign = 'left';
  ctx.textBaseline = 'top';
  for (const { area, rings, times } of shapes) {
    ctx.font = font(12, 600);
    const nameWidth = ctx.measureText(area.name).width + 4;
    ctx.font = font(11);
    const bothWidth = Math.max(nameWidth, ctx.measureText(times).width + 4);
    const outlines = rings.map((ring) => ring.map((point) => onScreen(view, point)));
    const label = placeLabel(outlines, windowOf(view), nameWidth, bothWidth, boxes);
    if (!label) continue;
    const { box, hasTimes } = label;
    ctx.font = font(12, 600);
    inkText(ctx, area.name, box.x + 2, box.y + 1, ink.ink, ink.ground);
    ctx.font = font(11);
    if (hasTimes) inkText(ctx, times, box.x + 2, box.y + 16, ink.ink, ink.ground);
    labels.push({ areaId: area.id, box });
  }
  return labels;
}

const NAME_HEIGHT_PX = 16;
const BOTH_HEIGHT_PX = 30;
/** Room kept free at the window's edges. */
const EDGE_PX = 6;
/** Steps downwards in which room is looked for. */
const STEP_PX = 22;

/**
 * Inside the outline and the window, with the times if they fit. A name for which a small area has
 * no room stands above or below it.
 */
export function placeLabel(
  outlines: readonly (readonly WorldPoint[])[],
  window: ScreenBounds,
  nameWidth: number,
  bothWidth: number,
  boxes: LabelBoxes,
): { readonly box: Box; readonly hasTimes: boolean } | null {
  const bounds = boundsOf(outlines.flat());
  const isOut = bounds.right < window.left || bounds.left > window.right;
  if (isOut || bounds.bottom < window.top || bounds.top > window.bottom) return null;
  for (const hasTimes of [true, false]) {
    const width = hasTimes ? bothWidth : nameWidth;
    const height = hasTimes ? BOTH_HEIGHT_PX : NAME_HEIGHT_PX;
    const lowest = Math.min(bounds.bottom, window.bottom) - height - 6;
    for (let y = Math.max(bounds.top, window.top) + 6; y <= lowest; y += STEP_PX) {
      const span = clearSpan(outlines, y, height, window);
      if (!span || span.right - span.left < width) continue;
      const x = (span.left + span.right - width) / 2;
      const box = { x, y, width, height };
      if (boxes.take(box)) return { box, hasTimes };
    }
  }
  const x = (bounds.left + bounds.right - nameWidth) / 2;
  const box = boxes.takeFirst(
    [bounds.top - NAME_HEIGHT_PX - 3, bounds.bottom + 3].map((y) => ({
      x,
      y,
      width: nameWidth,
      height: NAME_HEIGHT_PX,
    })),
  );
  return box && { box, hasTimes: false };
}

/** What lies inside the outlines over the whole height of a label, as far as its edges and its middle tell. */
function clearSpan(
  outlines: readonly (readonly WorldPoint[])[],
  y: number,
  height: number,
  window: Pick<ScreenBounds, 'left' | 'right'>,
): { readonly left: number; readonly right: number } | null {
  let clear: { left: number; right: number } | null = null;
  for (const line of [y + height / 2, y, y + height]) {
    const span = widestSpan(outlines, line, {
      left: clear ? clear.left - EDGE_PX : window.left,
      right: clear ? clear.right + EDGE_PX : window.right,
    });
    if (!span) return null;
    clear = span;
  }
  return clear;
}

/** The widest stretch of the height `y` that lies inside the outlines, in no hole, and in the window. */
export function widestSpan(
  outlines: readonly (readonly WorldPoint[])[],
  y: number,
  window: Pick<ScreenBounds, 'left' | 'right'>,
): { readonly left: number; readonly right: number } | null {
  const crossings: number[] = [];
  for (const outline of outlines) {
    outline.forEach((from, i) => {
      const to = outline[(i + 1) % outline.length] ?? from;
      if (from.y > y === to.y > y) return;
      crossings.push(from.x + ((y - from.y) / (to.y - from.y)) * (to.x - from.x));
    });
  }
  crossings.sort((a, b) => a - b);
  let widest: { left: number; right: number } | null = null;
  for (let i = 0; i + 1 < crossings.length; i += 2) {
    const left = Math.max(crossings[i] ?? 0, window.left + EDGE_PX);
    const right = Math.min(crossings[i + 1] ?? 0, window.right - EDGE_PX);
    if (right - left > (widest ? widest.right - widest.left : 0)) widest = { left, right };
  }
  return widest;
}

/** The part of the canvas that the window shows. */
const windowOf = ({ margin, width, height }: View): ScreenBounds => ({
  left: margin,
  top: margin,
  right: width - margin,
  bottom: height - margin,
});
