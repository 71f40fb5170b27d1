import type { LonLat } from '@shared/contract/common';
import type { MapInk } from './map-ink';
import { midpoints, type Outline } from './outline';
import { onScreen, toWorld, type View, type WorldPoint } from './world';

/** Half the side of a corner's handle; under a finger it is found a little way beside, too. */
const HANDLE_PX = 6;

/** The outline that is being drawn or changed, with handles to take hold of. */
export function paintOutline(
  ctx: CanvasRenderingContext2D,
  view: View,
  outline: Outline,
  /** Where the next corner would come, if it is known. */
  next: WorldPoint | null,
  ink: MapInk,
): void {
  const corners = outline.corners.map((corner) => onScreen(view, toWorld(corner)));
  const first = corners[0];
  if (!first) return;
  ctx.beginPath();
  for (const { x, y } of corners) ctx.lineTo(x, y);
  if (outline.isClosed) ctx.closePath();
  ctx.lineJoin = 'round';
  ctx.strokeStyle = ink.ground;
  ctx.lineWidth = 6;
  ctx.stroke();
  ctx.strokeStyle = ink.accent;
  ctx.lineWidth = 3;
  ctx.stroke();
  ctx.globalAlpha = 0.12;
  ctx.fillStyle = ink.accent;
  ctx.fill();
  ctx.globalAlpha = 1;

  const last = corners.at(-1);
  if (!outline.isClosed && next && last) {
    const { x, y } = onScreen(view, next);
    ctx.beginPath();
    ctx.moveTo(last.x, last.y);
    ctx.lineTo(x, y);
    if (corners.length > 1) ctx.lineTo(first.x, first.y);
    ctx.setLineDash([5, 5]);
    ctx.lineWidth = 1.75;
    ctx.stroke();
    ctx.setLineDash([]);
  }
  for (const middle of midpoints(outline)) paintMiddle(ctx, onScreen(view, toWorld(middle)), ink);
  corners.forEach((corner, i) => paintHandle(ctx, corner, i === outline.selected, ink));
}

function paintHandle(
  ctx: CanvasRenderingContext2D,
  { x, y }: WorldPoint,
  isSelected: boolean,
  ink: MapInk,
): void {
  const half = isSelected ? HANDLE_PX + 2 : HANDLE_PX;
  ctx.fillStyle = isSelected ? ink.accent : ink.ground;
  ctx.strokeStyle = isSelected ? ink.ground : ink.accent;
  ctx.lineWidth = 2;
  ctx.fillRect(x - half, y - half, 2 * half, 2 * half);
  ctx.strokeRect(x - half, y - half, 2 * half, 2 * half);
  if (isSelected) {
    ctx.strokeStyle = ink.accent;
    ctx.strokeRect(x - half - 3, y - half - 3, 2 * half + 6, 2 * half + 6);
  }
}

/** A plus: here a new corner can be had. */
function paintMiddle(ctx: CanvasRenderingContext2D, { x, y }: WorldPoint, ink: MapInk): void {
  ctx.beginPath();
  ctx.arc(x, y, 6, 0, 2 * Math.PI);
  ctx.fillStyle = ink.ground;
  ctx.fill();
  ctx.strokeStyle = ink.accent;
  ctx.lineWidth = 1.25;
  ctx.stroke();
  ctx.beginPath();
  ctx.moveTo(x - 3, y);
  ctx.lineTo(x + 3, y);
  ctx.moveTo(x, y - 3);
  ctx.lineTo(x, y + 3);
  ctx.stroke();
}

export type OutlineHit =
  | { readonly kind: 'corner'; readonly index: number }
  /** On the edge that begins at this corner. */
  | { readonly kind: 'middle'; readonly after: number };

/** What of the outline is under the pointer; corners before middles. */
export function outlineHit(
  outline: Outline,
  at: WorldPoint,
  toScreen: (place: LonLat) => WorldPoint,
  reachPx: number,
): OutlineHit | null {
  const nearest = (points: readonly LonLat[]): number | null => {
    let best: number | null = null;
    let bestPx = reachPx;
    points.forEach((point, i) => {
      const { x, y } = toScreen(point);
      const away = Math.hypot(x - at.x, y - at.y);
      if (away <= bestPx) {
        best = i;
        bestPx = away;
      }
    });
    return best;
  };
  const index = nearest(outline.corners);
  if (index !== null) return { kind: 'corner', index };
  const after = nearest(midpoints(outline));
  return after === null ? null : { kind: 'middle', after };
}
