import type { StormRoadDto } from '@shared/contract/storm-roads';
import type { Box, LabelBoxes } from './label-boxes';
import { font, inkText, type MapInk } from './map-ink';
import { boundsOf } from './paint-areas';
import type { StormRoadMark } from './paint-storm-roads';
import { lengthOf, pointAlong } from './screen-line';
import { colorOf, paintWave } from './storm-road-glyphs';
import type { StormRoadTense } from './storm-road-words';
import { isInView, onScreen, type View, type WorldPoint } from './world';

export const SIGN_PX = 10;

/** What a click on a sign or its name means. */
export interface StormRoadSign {
  readonly roadId: string;
  readonly box: Box;
}

/** The sign of each one, and its name and span where there is room. @returns what a click there means */
export function paintStormRoadSigns(
  ctx: CanvasRenderingContext2D,
  view: View,
  marks: readonly StormRoadMark[],
  boxes: LabelBoxes,
  ink: MapInk,
): readonly StormRoadSign[] {
  const signs: StormRoadSign[] = [];
  for (const mark of marks) {
    const at = placeOf(view, mark);
    if (!isInView(view, at, SIGN_PX)) continue;
    paintSign(ctx, at, mark.road, mark.tense, ink);
    const box = {
      x: at.x - SIGN_PX - 2,
      y: at.y - SIGN_PX - 2,
      width: 2 * SIGN_PX + 4,
      height: 2 * SIGN_PX + 4,
    };
    boxes.reserve(box);
    signs.push({ roadId: mark.road.id, box });
    const label = paintLabel(ctx, at, mark, boxes, ink);
    if (label) signs.push({ roadId: mark.road.id, box: label });
  }
  return signs;
}

function paintLabel(
  ctx: CanvasRenderingContext2D,
  at: WorldPoint,
  { title, tense, span }: StormRoadMark,
  boxes: LabelBoxes,
  ink: MapInk,
): Box | null {
  ctx.textAlign = 'left';
  ctx.textBaseline = 'top';
  ctx.font = font(12, 600);
  const titleWidth = ctx.measureText(title).width;
  ctx.font = font(11, tense === 'reported' ? 600 : 400);
  const width = Math.max(titleWidth, ctx.measureText(span).width) + 4;
  const box = boxes.takeFirst(
    [at.x + SIGN_PX + 4, at.x - SIGN_PX - 4 - width].map((x) => ({
      x,
      y: at.y - 15,
      width,
      height: 30,
    })),
  );
  if (!box) return null;
  inkText(ctx, span, box.x + 2, box.y + 15, ink.ink, ink.ground);
  ctx.font = font(12, 600);
  inkText(ctx, title, box.x + 2, box.y, ink.ink, ink.ground);
  return box;
}

/** A round sign: a bar for closed, waves for flooded, the share of speed for slow; hollow when not in force. */
export function paintSign(
  ctx: CanvasRenderingContext2D,
  { x, y }: WorldPoint,
  { kind, speedShare }: Pick<StormRoadDto, 'kind' | 'speedShare'>,
  tense: StormRoadTense,
  ink: MapInk,
): void {
  const color = colorOf(kind, ink);
  const isNow = tense === 'now';
  ctx.beginPath();
  ctx.arc(x, y, SIGN_PX + 1.5, 0, 2 * Math.PI);
  ctx.fillStyle = ink.ground;
  ctx.fill();
  ctx.beginPath();
  ctx.arc(x, y, SIGN_PX, 0, 2 * Math.PI);
  ctx.fillStyle = isNow ? color : ink.ground;
  ctx.fill();
  ctx.strokeStyle = color;
  ctx.lineWidth = 2;
  ctx.setLineDash(isNow ? [] : [3, 2.5]);
  ctx.stroke();
  ctx.setLineDash([]);
  const on = isNow ? ink.ground : color;
  if (tense === 'reported' || kind === 'slow') {
    ctx.font = font(kind === 'slow' && tense !== 'reported' ? 10 : 13, 600);
    ctx.textAlign = 'center';
    ctx.textBaseline = 'middle';
    ctx.fillStyle = on;
    const text = tense === 'reported' ? '?' : String(Math.round((speedShare ?? 0) * 100));
    ctx.fillText(text, x, y + 0.5);
    return;
  }
  ctx.strokeStyle = on;
  ctx.lineWidth = 2.5;
  if (kind === 'closed') {
    ctx.beginPath();
    ctx.moveTo(x - 5.5, y);
    ctx.lineTo(x + 5.5, y);
    ctx.stroke();
  } else {
    ctx.lineWidth = 1.75;
    for (const shift of [-2.5, 2.5]) paintWave(ctx, x, y + shift, 6);
  }
}

/** The middle of a stretch as it runs; the middle of an area's extent. */
function placeOf(view: View, { points, isArea }: StormRoadMark): WorldPoint {
  const line = points.map((point) => onScreen(view, point));
  if (!isArea) return pointAlong(line, lengthOf(line) / 2) ?? line[0]!;
  const { left, right, top, bottom } = boundsOf(line);
  return { x: (left + right) / 2, y: (top + bottom) / 2 };
}
