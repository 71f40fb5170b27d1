import type { WorldPoint } from './world';

/** A line on the canvas, in CSS pixels. */
export type ScreenLine = readonly WorldPoint[];

/** Makes lines the context's path; nothing is drawn yet. */
export function traceLines(ctx: CanvasRenderingContext2D, lines: readonly ScreenLine[]): void {
  ctx.beginPath();
  for (const line of lines)
    line.forEach(({ x, y }, i) => (i === 0 ? ctx.moveTo(x, y) : ctx.lineTo(x, y)));
}

export const lengthOf = (line: ScreenLine): number =>
  line.reduce((sum, { x, y }, i) => {
    const before = line[i - 1];
    return before ? sum + Math.hypot(x - before.x, y - before.y) : sum;
  }, 0);

export interface PointOnLine extends WorldPoint {
  /** Where the line leads there, in radians. */
  readonly angle: number;
}

/** The point so many pixels from the beginning; `null` beyond the end. */
export function pointAlong(line: ScreenLine, at: number): PointOnLine | null {
  let left = at;
  for (let i = 1; i < line.length; i++) {
    const from = line[i - 1]!;
    const to = line[i]!;
    const length = Math.hypot(to.x - from.x, to.y - from.y);
    if (left <= length && length > 0) {
      const share = left / length;
      return {
        x: from.x + (to.x - from.x) * share,
        y: from.y + (to.y - from.y) * share,
        angle: Math.atan2(to.y - from.y, to.x - from.x),
      };
    }
    left -= length;
  }
  return null;
}
