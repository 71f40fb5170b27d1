import type { AreaDto } from '@shared/contract/areas';
import type { MapInk } from './map-ink';
import { scratchCanvas } from './scratch-canvas';
import { onScreen, toWorld, type View, type WorldPoint } from './world';

/** An outage area, projected once. */
export interface AreaShape {
  readonly area: Pick<AreaDto, 'id' | 'name' | 'backAt'>;
  /** Outer rings and holes alike. */
  readonly rings: readonly (readonly WorldPoint[])[];
  readonly times: string;
}

export const areaShape = (area: AreaDto, times: string): AreaShape => ({
  area,
  rings: area.shape.flat().map((ring) => ring.map(toWorld)),
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
  for (const { area, rings } of shapes) {
    traceRings(ctx, view, rings);
    if (area.backAt === null && hatch) {
      // The pattern holds on to the ground, not to the window.
      const phase = { x: -(view.left % HATCH_PX), y: -(view.top % HATCH_PX) };
      hatch.setTransform(new DOMMatrix([1, 0, 0, 1, phase.x, phase.y]));
      ctx.fillStyle = hatch;
      ctx.fill('evenodd');
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
  const { canvas, pen } = scratchCanvas(HATCH_PX);
  pen.strokeStyle = ink.inkSoft;
  pen.globalAlpha = 0.34;
  pen.lineWidth = 1;
  pen.beginPath();
  for (const shift of [-HATCH_PX, 0, HATCH_PX]) {
    pen.moveTo(shift - 1, HATCH_PX + 1);
    pen.lineTo(shift + HATCH_PX + 1, -1);
  }
  pen.stroke();
  return ctx.createPattern(canvas, 'repeat');
}

export const tracePath = (
  ctx: CanvasRenderingContext2D,
  view: View,
  points: readonly WorldPoint[],
): void => traceRings(ctx, view, [points]);

export function traceRings(
  ctx: CanvasRenderingContext2D,
  view: View,
  rings: readonly (readonly WorldPoint[])[],
): void {
  ctx.beginPath();
  for (const ring of rings) {
    ring.forEach((point, i) => {
      const { x, y } = onScreen(view, point);
      if (i === 0) ctx.moveTo(x, y);
      else ctx.lineTo(x, y);
    });
    ctx.closePath();
  }
}

export interface ScreenBounds {
  readonly left: number;
  readonly top: number;
  readonly right: number;
  readonly bottom: number;
}

/** Of points on the canvas. */
export function boundsOf(points: readonly WorldPoint[]): ScreenBounds {
  let left = Infinity;
  let top = Infinity;
  let right = -Infinity;
  let bottom = -Infinity;
  for (const { x, y } of points) {
    left = Math.min(left, x);
    right = Math.max(right, x);
    top = Math.min(top, y);
    bottom = Math.max(bottom, y);
  }
  return { left, top, right, bottom };
}
