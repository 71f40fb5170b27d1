import type { Press } from './call-mark';
import { LabelBoxes } from './label-boxes';
import { font, inkText, type MapInk } from './map-ink';
import { dotRadius, MARK_RADIUS, type PlacedMark } from './mark-places';
import type { MarkSprites } from './mark-sprites';
import { isInView, onScreen, type View } from './world';

/** From here on a mark's number stands beside it. */
const NUMBERS_FROM_ZOOM = 16;
/** Farther out every mark hides others; that several share one house is then no news. */
const COUNTS_FROM_ZOOM = 14;
const OUT_OF_SIGHT_PX = 24;

/** Draws the calls that have room for a mark, the most urgent last and so on top. */
export function paintCalls(
  ctx: CanvasRenderingContext2D,
  view: View,
  placed: readonly PlacedMark[],
  sprites: MarkSprites,
  ink: MapInk,
): void {
  const inSight: { readonly one: PlacedMark; readonly x: number; readonly y: number }[] = [];
  for (const one of placed) {
    if (!one.isFull) continue;
    const { x, y } = onScreen(view, one.mark);
    if (isInView(view, { x, y }, OUT_OF_SIGHT_PX)) inSight.push({ one, x, y });
  }
  for (const { one, x, y } of inSight.toReversed()) {
    sprites.stamp(ctx, lookOf(one), x, y);
    if (one.count > 1 && view.zoom >= COUNTS_FROM_ZOOM) paintCount(ctx, one, x, y, ink);
  }
  if (view.zoom < NUMBERS_FROM_ZOOM) return;
  const boxes = new LabelBoxes();
  for (const { one, x, y } of inSight) {
    const radius = MARK_RADIUS[one.mark.press];
    boxes.reserve({ x: x - radius, y: y - radius, width: 2 * radius, height: 2 * radius });
  }
  for (const { one, x, y } of inSight) {
    if (one.count === 1) paintNumber(ctx, one, x, y, boxes, ink);
  }
}

export const lookOf = ({ mark }: PlacedMark) => ({
  kind: mark.kind,
  press: mark.press,
  isOnRoute: mark.isOnRoute,
  hasDanger: mark.call.danger,
});

const BY_PRESS: readonly Press[] = ['none', 'later', 'soon', 'now'];

/** Copies of small pictures: one path of three thousand circles takes ten times as long to fill. */
export function paintDots(
  ctx: CanvasRenderingContext2D,
  view: View,
  placed: readonly PlacedMark[],
  sprites: MarkSprites,
): void {
  for (const press of BY_PRESS) {
    const radius = dotRadius(press, view.zoom);
    for (const { mark, isFull } of placed) {
      if (isFull || mark.press !== press) continue;
      const { x, y } = onScreen(view, mark);
      if (isInView(view, { x, y }, OUT_OF_SIGHT_PX)) sprites.dot(ctx, press, radius, x, y);
    }
  }
}

/** Right of the mark or left of it, and nowhere when others stand on both sides. */
function paintNumber(
  ctx: CanvasRenderingContext2D,
  { mark }: PlacedMark,
  x: number,
  y: number,
  boxes: LabelBoxes,
  ink: MapInk,
): void {
  const text = String(mark.call.number);
  const beside = MARK_RADIUS[mark.press] + 5;
  ctx.font = font(12, 500);
  ctx.textAlign = 'left';
  ctx.textBaseline = 'middle';
  const { width } = ctx.measureText(text);
  const box = boxes.takeFirst(
    [x + beside, x - beside - width].map((left) => ({ x: left, y: y - 7, width, height: 14 })),
  );
  if (box) inkText(ctx, text, box.x, y, ink.ink, ink.ground);
}

/** How many calls stand in this place, on a tab at the mark's lower right. */
function paintCount(
  ctx: CanvasRenderingContext2D,
  { mark, count }: PlacedMark,
  x: number,
  y: number,
  ink: MapInk,
): void {
  const radius = MARK_RADIUS[mark.press];
  const text = `×${count}`;
  ctx.font = font(10, 600);
  ctx.textAlign = 'left';
  ctx.textBaseline = 'middle';
  const width = ctx.measureText(text).width + 6;
  const left = x + radius * 0.55;
  const top = y + radius * 0.35;
  ctx.fillStyle = ink.ground;
  ctx.fillRect(left - 1, top - 1, width + 2, 15);
  ctx.fillStyle = ink.ink;
  ctx.fillRect(left, top, width, 13);
  ctx.fillStyle = ink.ground;
  ctx.fillText(text, left + 3, top + 7);
}

/** Rings around what is selected (two lines) and what is pointed at (one). */
export function paintRing(
  ctx: CanvasRenderingContext2D,
  view: View,
  one: PlacedMark,
  kind: 'selected' | 'hovered',
  sprites: MarkSprites,
  ink: MapInk,
): void {
  const { x, y } = onScreen(view, one.mark);
  // Whatever it was among the others, this one is seen in full.
  if (!one.isFull) sprites.stamp(ctx, lookOf(one), x, y);
  const radius = MARK_RADIUS[one.mark.press] + (one.mark.press === 'now' ? 8 : 6);
  const ring = (color: string, width: number, at: number): void => {
    ctx.beginPath();
    ctx.arc(x, y, at, 0, 2 * Math.PI);
    ctx.strokeStyle = color;
    ctx.lineWidth = width;
    ctx.stroke();
  };
  ring(ink.ground, 5, radius);
  ring(ink.accent, 2.5, radius);
  if (kind === 'selected') {
    ring(ink.ground, 4, radius + 5);
    ring(ink.accent, 2, radius + 5);
    for (const [dx, dy] of TICKS) {
      ctx.beginPath();
      ctx.moveTo(x + dx * (radius + 5), y + dy * (radius + 5));
      ctx.lineTo(x + dx * (radius + 12), y + dy * (radius + 12));
      ctx.strokeStyle = ink.accent;
      ctx.lineWidth = 2.5;
      ctx.stroke();
    }
    paintTag(ctx, String(one.mark.call.number), x + radius + 8, y, ink);
  }
}

/** The number of the selected call, on a plate that hides the one behind it. */
function paintTag(
  ctx: CanvasRenderingContext2D,
  text: string,
  left: number,
  y: number,
  ink: MapInk,
): void {
  ctx.font = font(12, 600);
  ctx.textAlign = 'left';
  ctx.textBaseline = 'middle';
  ctx.beginPath();
  ctx.roundRect(left, y - 10, ctx.measureText(text).width + 12, 20, 4);
  ctx.fillStyle = ink.ground;
  ctx.fill();
  ctx.strokeStyle = ink.accent;
  ctx.lineWidth = 1.5;
  ctx.stroke();
  ctx.fillStyle = ink.ink;
  ctx.fillText(text, left + 6, y + 0.5);
}

const TICKS: readonly (readonly [number, number])[] = [
  [1, 0],
  [-1, 0],
  [0, 1],
  [0, -1],
];
