import type { StormRoadDto } from '@shared/contract/storm-roads';
import type { StormRoadKind } from '@shared/domain/roads/conditions';
import type { MapInk } from './map-ink';
import { traceRings } from './paint-areas';
import { scratchCanvas } from './scratch-canvas';
import { lengthOf, pointAlong, type ScreenLine, traceLines } from './screen-line';
import { colorOf, paintGlyph } from './storm-road-glyphs';
import { SIGN_PX } from './storm-road-signs';
import type { StormRoadTense } from './storm-road-words';
import { onScreen, toWorld, type View, type WorldPoint } from './world';

/** A storm road, projected once. */
export interface StormRoadMark {
  readonly road: Pick<StormRoadDto, 'id' | 'kind' | 'speedShare'>;
  readonly points: readonly WorldPoint[];
  readonly isArea: boolean;
  readonly tense: StormRoadTense;
  /** Such as "Flooded: Larch Lane". */
  readonly title: string;
  /** Such as "until 18:00". */
  readonly span: string;
}

export const stormRoadMark = (
  road: StormRoadDto,
  tense: StormRoadTense,
  words: Pick<StormRoadMark, 'title' | 'span'>,
): StormRoadMark => ({
  road,
  points: (road.shape.type === 'line' ? road.shape.points : road.shape.ring).map(toWorld),
  isArea: road.shape.type === 'area',
  tense,
  ...words,
});

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
  ctx.strokeStyle = colorOf(road.kind, ink);
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
  const color = colorOf(road.kind, ink);
  const isNow = tense === 'now';
  ctx.lineJoin = 'round';
  ctx.lineCap = 'butt';
  traceLines(ctx, [line]);
  ctx.strokeStyle = ink.ground;
  ctx.lineWidth = isNow ? 10 : 7;
  ctx.stroke();
  ctx.strokeStyle = color;
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
    paintGlyph(ctx, road.kind, x, y, 5);
    ctx.strokeStyle = color;
    ctx.lineWidth = 2;
    paintGlyph(ctx, road.kind, x, y, 5);
  }
}

export function makeStormRoadPatterns(
  ctx: CanvasRenderingContext2D,
  ink: MapInk,
): StormRoadPatterns {
  const made = (kind: StormRoadKind): CanvasPattern | null => {
    const { canvas, pen } = scratchCanvas(TILE_PX);
    pen.strokeStyle = pen.fillStyle = colorOf(kind, ink);
    pen.globalAlpha = 0.45;
    pen.lineWidth = 1.5;
    if (kind === 'slow') {
      pen.beginPath();
      pen.arc(TILE_PX / 2, TILE_PX / 2, 1.75, 0, 2 * Math.PI);
      pen.fill();
    } else paintGlyph(pen, kind, TILE_PX / 2, TILE_PX / 2, kind === 'closed' ? 3 : TILE_PX / 2);
    return ctx.createPattern(canvas, 'repeat');
  };
  return { closed: made('closed'), flooded: made('flooded'), slow: made('slow') };
}

/** Points along a line at equal steps, the sign's own place in the middle left out. */
export function spread(line: ScreenLine, every = EVERY_PX): WorldPoint[] {
  const middle = lengthOf(line) / 2;
  const count = Math.floor(middle / every);
  const points: WorldPoint[] = [];
  for (let k = 1; k <= count; k++) {
    const away = k * every;
    if (away < SIGN_PX + 8) continue;
    for (const at of [middle - away, middle + away]) {
      const point = pointAlong(line, at);
      if (point) points.push(point);
    }
  }
  return points;
}
