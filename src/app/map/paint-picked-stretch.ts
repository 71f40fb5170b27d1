import type { LonLat } from '@shared/contract/common';
import { font, type MapInk } from './map-ink';
import { traceLines } from './screen-line';
import { onScreen, toWorld, type View } from './world';

/** The stretch that is being picked, with its places. */
export function paintPickedStretch(
  ctx: CanvasRenderingContext2D,
  view: View,
  line: readonly LonLat[],
  picks: readonly LonLat[],
  ink: MapInk,
): void {
  const points = line.map((one) => onScreen(view, toWorld(one)));
  traceLines(ctx, [points]);
  ctx.lineJoin = 'round';
  ctx.lineCap = 'round';
  ctx.strokeStyle = ink.ground;
  ctx.lineWidth = 9;
  ctx.stroke();
  ctx.strokeStyle = ink.accent;
  ctx.lineWidth = 5;
  ctx.stroke();
  ctx.lineCap = 'butt';
  picks.forEach((pick, i) => {
    const { x, y } = onScreen(view, toWorld(pick));
    ctx.beginPath();
    ctx.arc(x, y, 8, 0, 2 * Math.PI);
    ctx.fillStyle = ink.ground;
    ctx.fill();
    ctx.strokeStyle = ink.accent;
    ctx.lineWidth = 2;
    ctx.stroke();
    ctx.font = font(11, 600);
    ctx.textAlign = 'center';
    ctx.textBaseline = 'middle';
    ctx.fillStyle = ink.accent;
    ctx.fillText(String(i + 1), x, y + 0.5);
  });
}
