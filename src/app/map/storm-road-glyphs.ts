import type { StormRoadKind } from '@shared/domain/roads/conditions';
import type { MapInk } from './map-ink';

export const colorOf = (kind: StormRoadKind, ink: MapInk): string =>
  kind === 'closed' ? ink.danger : kind === 'flooded' ? ink.accent : ink.warn;

/** Two strokes that cross, or a wave; the way it is stroked is the caller's. */
export function paintGlyph(
  ctx: CanvasRenderingContext2D,
  kind: StormRoadKind,
  x: number,
  y: number,
  half: number,
): void {
  if (kind === 'flooded') return paintWave(ctx, x, y, half);
  ctx.beginPath();
  ctx.moveTo(x - half, y - half);
  ctx.lineTo(x + half, y + half);
  ctx.moveTo(x + half, y - half);
  ctx.lineTo(x - half, y + half);
  ctx.stroke();
}

export function paintWave(ctx: CanvasRenderingContext2D, x: number, y: number, half: number): void {
  const step = half / 2;
  ctx.beginPath();
  ctx.moveTo(x - half, y);
  ctx.quadraticCurveTo(x - half + step / 2, y - step, x - half + step, y);
  ctx.quadraticCurveTo(x - step / 2, y + step, x, y);
  ctx.quadraticCurveTo(x + step / 2, y - step, x + step, y);
  ctx.quadraticCurveTo(x + half - step / 2, y + step, x + half, y);
  ctx.stroke();
}
