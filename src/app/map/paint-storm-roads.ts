import type { StormRoadDto } from '@shared/contract/storm-roads';
import type { StormRoadKind } from '@shared/domain/roads/conditions';
import type { Box, LabelBoxes } from './label-boxes';
import { font, inkText, type MapInk } from './map-ink';
import { boundsOf, traceRings } from './paint-areas';
import { KIND_WORDS, type StormRoadTense } from './storm-road-words';
import { isInView, onScreen, toWorld, type View, type WorldPoint } from './world';

/** A storm road, projected once. */
export interface StormRoadMark {
  readonly road: StormRoadDto;
  readonly points: readonly WorldPoint[];
  readonly isArea: boolean;
  readonly tense: StormRoadTense;
  /** Such as "until 18:00". */
  readonly span: string;
}

export const stormRoadMark = (
  road: StormRoadDto,
  tense: StormRoadTense,
  span: string,
): StormRoadMark => ({
  road,
  points: (road.shape.type === 'line' ? road.shape.points : road.shape.ring).map(toWorld),
  isArea: road.shape.type === 'area',
  tense,
  span,
});

const SIGN_PX = 10;
const TILE_PX = 14;
/** Marks along a stretch stand so far apart. */
const EVERY_PX = 24;

/** Ways of drawing an area, by kind; made once for each set of colours. */
export type StormRoadPatterns = Readonly<Record<StormRoadKind, CanvasPattern | null>>;

/** Closed: crosses on a firm line. Flooded: a double line with waves. Slow: dots. Not now: thin and broken. */
export function paintStormRoads(
  ctx: CanvasRenderingContext2D,
  view: View,
  marks: readonly StormRoadMark[],
  patterns: StormRoadPatterns,
  ink: MapInk,
): void {
  for (const mark of marks) {
    if (mark.isArea) paintArea(ctx, view, mark, patterns, ink);
    else paintStretch(ctx, view, mark, ink);
  }
}

function paintArea(
  ctx: CanvasRenderingContext2D,
  view: View,
  { points, road, tense }: StormRoadMark,
  patterns: StormRoadPatterns,
  ink: MapInk,
): void {
  traceRings(ctx, view, [points]);
  const pattern = patterns[road.kind];
  if (pattern && tense === 'now') {
    // The pattern holds on to the ground, not to the window.
    pattern.setTransform(
      new DOMMatrix([1, 0, 0, 1, -(view.left % TILE_PX), -(view.top % TILE_PX)]),
    );
    ctx.fillStyle = pattern;
    ctx.fill();
  }
  ctx.lineJoin = 'round';
  ctx.strokeStyle = ink.ground;
  ctx.lineWidth = 5;
  ctx.stroke();
  ctx.strokeStyle = colourOf(road.kind, ink);
  ctx.lineWidth = tense === 'now' ? 2.5 : 1.5;
  ctx.setLineDash(tense === 'now' ? [10, 3, 2, 3] : [3, 4]);
  ctx.stroke();
  ctx.setLineDash([]);
}

function paintStretch(
  ctx: CanvasRenderingContext2D,
  view: View,
  { points, road, tense }: StormRoadMark,
  ink: MapInk,
): void {
  const line = points.map((point) => onScreen(view, point));
  const colour = colourOf(road.kind, ink);
  const isNow = tense === 'now';
  ctx.lineJoin = 'round';
  ctx.lineCap = 'butt';
  trace(ctx, line);
  ctx.strokeStyle = ink.ground;
  ctx.lineWidth = isNow ? 10 : 7;
  ctx.stroke();
  ctx.strokeStyle = colour;
  ctx.lineWidth = isNow ? 5 : 2.5;
  ctx.setLineDash(isNow && road.kind !== 'slow' ? [] : isNow ? [2, 5] : [6, 4]);
  ctx.stroke();
  ctx.setLineDash([]);
  if (!isNow) return;
  if (road.kind === 'flooded') {
    ctx.strokeStyle = ink.ground;
    ctx.lineWidth = 1.5;
    ctx.stroke();
  }
  if (road.kind === 'slow') return;
  for (const { x, y } of spread(line)) {
    ctx.strokeStyle = ink.ground;
    ctx.lineWidth = 5;
    glyph(ctx, road.kind, x, y, 5);
    ctx.strokeStyle = colour;
    ctx.lineWidth = 2;
    glyph(ctx, road.kind, x, y, 5);
  }
}

/** The sign of each one, and its name and span where there is room. @returns what a click there means */
export function paintStormRoadSigns(
  ctx: CanvasRenderingContext2D,
  view: View,
  marks: readonly StormRoadMark[],
  boxes: LabelBoxes,
  ink: MapInk,
): readonly { readonly road: StormRoadDto; readonly box: Box }[] {
  const signs: { readonly road: StormRoadDto; readonly box: Box }[] = [];
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
    signs.push({ road: mark.road, box });
    const label = paintLabel(ctx, at, mark, boxes, ink);
    if (label) signs.push({ road: mark.road, box: label });
  }
  return signs;
}

function paintLabel(
  ctx: CanvasRenderingContext2D,
  at: WorldPoint,
  { road, tense, span }: StormRoadMark,
  boxes: LabelBoxes,
  ink: MapInk,
): Box | null {
  const first = `${KIND_WORDS[road.kind]}: ${road.name}`;
  ctx.textAlign = 'left';
  ctx.textBaseline = 'top';
  ctx.font = font(12, 600);
  const firstWidth = ctx.measureText(first).width;
  ctx.font = font(11, tense === 'reported' ? 600 : 400);
  const width = Math.max(firstWidth, ctx.measureText(span).width) + 4;
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
  inkText(ctx, first, box.x + 2, box.y, ink.ink, ink.ground);
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
  const colour = colourOf(kind, ink);
  const isNow = tense === 'now';
  ctx.beginPath();
  ctx.arc(x, y, SIGN_PX + 1.5, 0, 2 * Math.PI);
  ctx.fillStyle = ink.ground;
  ctx.fill();
  ctx.beginPath();
  ctx.arc(x, y, SIGN_PX, 0, 2 * Math.PI);
  ctx.fillStyle = isNow ? colour : ink.ground;
  ctx.fill();
  ctx.strokeStyle = colour;
  ctx.lineWidth = 2;
  ctx.setLineDash(isNow ? [] : [3, 2.5]);
  ctx.stroke();
  ctx.setLineDash([]);
  const on = isNow ? ink.ground : colour;
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
    for (const shift of [-2.5, 2.5]) wave(ctx, x, y + shift, 6);
  }
}

/** The stretch that is being picked, with its places. */
export function paintPickedStretch(
  ctx: CanvasRenderingContext2D,
  view: View,
  line: readonly (readonly [number, number])[],
  picks: readonly (readonly [number, number])[],
  ink: MapInk,
): void {
  const points = line.map((one) => onScreen(view, toWorld(one)));
  trace(ctx, points);
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

export function makeStormRoadPatterns(
  ctx: CanvasRenderingContext2D,
  ink: MapInk,
): StormRoadPatterns {
  const made = (kind: StormRoadKind): CanvasPattern | null => {
    const tile = document.createElement('canvas');
    tile.width = tile.height = TILE_PX;
    const pen = tile.getContext('2d');
    if (!pen) return null;
    pen.strokeStyle = pen.fillStyle = colourOf(kind, ink);
    pen.globalAlpha = 0.45;
    pen.lineWidth = 1.5;
    if (kind === 'slow') {
      pen.beginPath();
      pen.arc(TILE_PX / 2, TILE_PX / 2, 1.75, 0, 2 * Math.PI);
      pen.fill();
    } else glyph(pen, kind, TILE_PX / 2, TILE_PX / 2, kind === 'closed' ? 3 : TILE_PX / 2);
    return ctx.createPattern(tile, 'repeat');
  };
  return { closed: made('closed'), flooded: made('flooded'), slow: made('slow') };
}

const colourOf = (kind: StormRoadKind, ink: MapInk): string =>
  kind === 'closed' ? ink.danger : kind === 'flooded' ? ink.accent : ink.warn;

function glyph(
  ctx: CanvasRenderingContext2D,
  kind: StormRoadKind,
  x: number,
  y: number,
  half: number,
): void {
  if (kind === 'flooded') return wave(ctx, x, y, half);
  ctx.beginPath();
  ctx.moveTo(x - half, y - half);
  ctx.lineTo(x + half, y + half);
  ctx.moveTo(x + half, y - half);
  ctx.lineTo(x - half, y + half);
  ctx.stroke();
}

function wave(ctx: CanvasRenderingContext2D, x: number, y: number, half: number): void {
  const step = half / 2;
  ctx.beginPath();
  ctx.moveTo(x - half, y);
  ctx.quadraticCurveTo(x - half + step / 2, y - step, x - half + step, y);
  ctx.quadraticCurveTo(x - step / 2, y + step, x, y);
  ctx.quadraticCurveTo(x + step / 2, y - step, x + step, y);
  ctx.quadraticCurveTo(x + half - step / 2, y + step, x + half, y);
  ctx.stroke();
}

function trace(ctx: CanvasRenderingContext2D, points: readonly WorldPoint[]): void {
  ctx.beginPath();
  points.forEach(({ x, y }, i) => (i === 0 ? ctx.moveTo(x, y) : ctx.lineTo(x, y)));
}

/** Points along a line at equal steps, the sign's own place in the middle left out. */
export function spread(line: readonly WorldPoint[], every = EVERY_PX): WorldPoint[] {
  const all = lengthOf(line);
  const count = Math.floor(all / 2 / every);
  const points: WorldPoint[] = [];
  for (let k = 1; k <= count; k++) {
    const away = k * every;
    if (away < SIGN_PX + 8) continue;
    points.push(along(line, all / 2 - away), along(line, all / 2 + away));
  }
  return points;
}

const lengthOf = (line: readonly WorldPoint[]): number =>
  line.reduce((sum, { x, y }, i) => {
    const before = line[i - 1];
    return before ? sum + Math.hypot(x - before.x, y - before.y) : 0;
  }, 0);

function along(line: readonly WorldPoint[], distance: number): WorldPoint {
  let left = distance;
  for (let i = 1; i < line.length; i++) {
    const [a, b] = [line[i - 1]!, line[i]!];
    const length = Math.hypot(b.x - a.x, b.y - a.y);
    if (left <= length && length > 0) {
      const share = left / length;
      return { x: a.x + (b.x - a.x) * share, y: a.y + (b.y - a.y) * share };
    }
    left -= length;
  }
  return line.at(-1) ?? { x: 0, y: 0 };
}

/** The middle of a stretch as it runs; the middle of an area's extent. */
function placeOf(view: View, { points, isArea }: StormRoadMark): WorldPoint {
  const line = points.map((point) => onScreen(view, point));
  if (!isArea) return along(line, lengthOf(line) / 2);
  const { left, right, top, bottom } = boundsOf(line);
  return { x: (left + right) / 2, y: (top + bottom) / 2 };
}
