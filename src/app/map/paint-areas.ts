import type { AreaDto } from '@shared/contract/areas';
import type { Box, LabelBoxes } from './label-boxes';
import { font, inkText, type MapInk } from './map-ink';
import { onScreen, toWorld, type View, type WorldPoint } from './world';

/** An outage area, projected once. */
export interface AreaShape {
  readonly area: AreaDto;
  readonly points: readonly WorldPoint[];
  readonly times: string;
}

export const areaShape = (area: AreaDto, times: string): AreaShape => ({
  area,
  points: area.ring.map(toWorld),
  times,
});

const HATCH_PX = 9;

/** Still out: hatched, with a firm line. Back: clear, with a broken one. */
export function paintAreas(
  ctx: CanvasRenderingContext2D,
  view: View,
  shapes: readonly AreaShape[],
  hatch: CanvasPattern | null,
  ink: MapInk,
): void {
  for (const { area, points } of shapes) {
    tracePath(ctx, view, points);
    if (area.backAt === null && hatch) {
      // The pattern holds on to the ground, not to the window.
      const phase = { x: -(view.left % HATCH_PX), y: -(view.top % HATCH_PX) };
      hatch.setTransform(new DOMMatrix([1, 0, 0, 1, phase.x, phase.y]));
      ctx.fillStyle = hatch;
      ctx.fill();
    }
    ctx.lineJoin = 'round';
    ctx.strokeStyle = ink.ground;
    ctx.lineWidth = 4;
    ctx.globalAlpha = 0.7;
    ctx.stroke();
    ctx.globalAlpha = 1;
    ctx.strokeStyle = ink.inkSoft;
    ctx.lineWidth = area.backAt === null ? 2 : 1.5;
    ctx.setLineDash(area.backAt === null ? [] : [7, 5]);
    ctx.stroke();
    ctx.setLineDash([]);
  }
}

export function makeHatch(ctx: CanvasRenderingContext2D, ink: MapInk): CanvasPattern | null {
  const tile = document.createElement('canvas');
  tile.width = tile.height = HATCH_PX;
  const pen = tile.getContext('2d');
  if (!pen) return null;
  pen.strokeStyle = ink.inkSoft;
  pen.globalAlpha = 0.34;
  pen.lineWidth = 1;
  pen.beginPath();
  for (const shift of [-HATCH_PX, 0, HATCH_PX]) {
    pen.moveTo(shift - 1, HATCH_PX + 1);
    pen.lineTo(shift + HATCH_PX + 1, -1);
  }
  pen.stroke();
  return ctx.createPattern(tile, 'repeat');
}

export function tracePath(
  ctx: CanvasRenderingContext2D,
  view: View,
  points: readonly WorldPoint[],
): void {
  ctx.beginPath();
  points.forEach((point, i) => {
    const { x, y } = onScreen(view, point);
    if (i === 0) ctx.moveTo(x, y);
    else ctx.lineTo(x, y);
  });
  ctx.closePath();
}

/** Name and times on the area's upper edge, or where the window's edge cuts it. */
export function paintAreaLabels(
  ctx: CanvasRenderingContext2D,
  view: View,
  shapes: readonly AreaShape[],
  boxes: LabelBoxes,
  ink: MapInk,
): readonly { readonly area: AreaDto; readonly box: Box }[] {
  const labels: { readonly area: AreaDto; readonly box: Box }[] = [];
  ctx.textAlign = 'left';
  ctx.textBaseline = 'top';
  for (const { area, points, times } of shapes) {
    const bounds = boundsOf(view, points);
    const window = windowOf(view);
    if (bounds.right < window.left + 40 || bounds.left > window.right - 40) continue;
    if (bounds.bottom < window.top + 24 || bounds.top > window.bottom - 24) continue;
    const label = placeLabel(ctx, view, bounds, area.name, times, boxes);
    if (!label) continue;
    const { box, hasTimes } = label;
    ctx.font = font(12, 600);
    inkText(ctx, area.name, box.x + 2, box.y + 1, ink.ink, ink.ground);
    ctx.font = font(11);
    if (hasTimes) inkText(ctx, times, box.x + 2, box.y + 16, ink.ink, ink.ground);
    labels.push({ area, box });
  }
  return labels;
}

/** With its times where the area is large enough on screen to be what one looks at. */
const TIMES_FROM_PX = 90;

function placeLabel(
  ctx: CanvasRenderingContext2D,
  view: View,
  bounds: ScreenBounds,
  name: string,
  times: string,
  boxes: LabelBoxes,
): { readonly box: Box; readonly hasTimes: boolean } | null {
  ctx.font = font(12, 600);
  const nameWidth = ctx.measureText(name).width + 4;
  ctx.font = font(11);
  const timesWidth = ctx.measureText(times).width + 4;
  const window = windowOf(view);
  const middle = (Math.max(bounds.left, window.left) + Math.min(bounds.right, window.right)) / 2;
  const top = Math.max(bounds.top, window.top) + 6;
  for (const hasTimes of bounds.right - bounds.left >= TIMES_FROM_PX ? [true, false] : [false]) {
    const width = hasTimes ? Math.max(nameWidth, timesWidth) : nameWidth;
    const height = hasTimes ? 30 : 16;
    const x = clamp(middle - width / 2, window.left + 6, window.right - width - 6);
    const box = boxes.takeFirst(
      [top, bounds.top - height - 3, bounds.bottom + 3].map((y) => ({ x, y, width, height })),
    );
    if (box) return { box, hasTimes };
  }
  return null;
}

export interface ScreenBounds {
  readonly left: number;
  readonly top: number;
  readonly right: number;
  readonly bottom: number;
}

/** The part of the canvas that the window shows. */
const windowOf = ({ margin, width, height }: View): ScreenBounds => ({
  left: margin,
  top: margin,
  right: width - margin,
  bottom: height - margin,
});

export function boundsOf(view: View, points: readonly WorldPoint[]): ScreenBounds {
  let left = Infinity;
  let top = Infinity;
  let right = -Infinity;
  let bottom = -Infinity;
  for (const point of points) {
    const { x, y } = onScreen(view, point);
    left = Math.min(left, x);
    right = Math.max(right, x);
    top = Math.min(top, y);
    bottom = Math.max(bottom, y);
  }
  return { left, top, right, bottom };
}

const clamp = (value: number, least: number, most: number): number =>
  Math.max(least, Math.min(value, most));
