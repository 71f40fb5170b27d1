import { font, type MapInk } from './map-ink';
import type { ProposedRoute, RouteLeg, RouteShape } from './route-shape';
import type { Step } from './scene-layer';
import { isInView, onScreen, type View, type WorldPoint } from './world';

/** How a leg is drawn; legs of one look are drawn in one stroke. */
interface LegLook {
  readonly color: string;
  readonly width: number;
  /** In pixels, drawn and left out by turns; empty for a whole line. */
  readonly dash: readonly number[];
  readonly arrowPx: number;
  readonly arrowEveryPx: number;
}

/** Farther out, sixty routes are a background, and only the chosen one has its arrows. */
const ARROWS_FROM_ZOOM = 12;
/** A straight line is dotted: it is no road, or not known yet. */
const DOTS = [1.5, 4.5];
const PLANNED = [9, 5];

/** So many legs are drawn in one stroke: a stroke of all of them would hold up a frame by itself. */
const LEGS_AT_ONCE = 24;

/**
 * Along the roads, whole for what is accepted and broken for what is only planned; the chosen route
 * last, wider and in the accent's colour.
 *
 * @returns what is to be drawn, part by part
 */
export function routeSteps(
  view: View,
  shapes: readonly RouteShape[],
  chosenId: string | null,
  ink: MapInk,
): Step[] {
  const isFar = view.zoom < ARROWS_FROM_ZOOM;
  return [false, true].flatMap((isChosen) => {
    const legs = shapes
      .filter(({ technician }) => (technician.id === chosenId) === isChosen)
      .flatMap((shape) => shape.legs);
    const look: LegLook = {
      color: isChosen ? ink.accent : ink.inkSoft,
      width: isChosen ? 3 : isFar ? 1.1 : 1.6,
      dash: [],
      arrowPx: isChosen ? 7 : isFar ? 0 : 5,
      arrowEveryPx: isChosen ? 110 : 170,
    };
    const groups: readonly (readonly [readonly RouteLeg[], readonly number[]])[] = [
      [legs.filter(({ way, isFirm }) => way && isFirm), []],
      [legs.filter(({ way, isFirm }) => way && !isFirm), PLANNED],
      [legs.filter(({ way }) => !way), DOTS],
    ];
    return groups.flatMap(([group, dash]) =>
      piecesOf(group).map(
        (piece): Step =>
          (ctx) =>
            paintLegs(ctx, view, piece, { ...look, dash }, ink.ground),
      ),
    );
  });
}

const piecesOf = (legs: readonly RouteLeg[]): RouteLeg[][] =>
  Array.from({ length: Math.ceil(legs.length / LEGS_AT_ONCE) }, (_, i) =>
    legs.slice(i * LEGS_AT_ONCE, (i + 1) * LEGS_AT_ONCE),
  );

/**
 * What a proposal would make of the routes: two thin lines with open arrows, so that it is told from
 * what is in force without its colour.
 */
export function paintProposal(
  ctx: CanvasRenderingContext2D,
  view: View,
  routes: readonly ProposedRoute[],
  chosenId: string | null,
  ink: MapInk,
): void {
  for (const { technicianId, legs } of routes) {
    const isChosen = technicianId === chosenId;
    if (chosenId !== null && !isChosen) continue;
    const width = isChosen ? 6.5 : 5;
    const paths = pathsInView(view, legs);
    ctx.lineJoin = 'round';
    ctx.lineCap = 'round';
    trace(ctx, paths);
    ctx.strokeStyle = ink.accent;
    ctx.lineWidth = width;
    ctx.stroke();
    ctx.strokeStyle = ink.ground;
    ctx.lineWidth = width - 2.5;
    ctx.stroke();
    const arrows = arrowsOn(view, paths, 100);
    traceArrows(ctx, arrows, isChosen ? 8.5 : 7);
    ctx.fillStyle = ink.ground;
    ctx.fill();
    ctx.strokeStyle = ink.accent;
    ctx.lineWidth = 1.5;
    ctx.stroke();
  }
}

function paintLegs(
  ctx: CanvasRenderingContext2D,
  view: View,
  legs: readonly RouteLeg[],
  { color, width, dash, arrowPx, arrowEveryPx }: LegLook,
  rim: string,
): void {
  const paths = pathsInView(view, legs);
  if (paths.length === 0) return;
  ctx.lineJoin = 'round';
  ctx.lineCap = dash === DOTS ? 'round' : 'butt';
  trace(ctx, paths);
  if (arrowPx > 0) {
    ctx.strokeStyle = rim;
    ctx.lineWidth = width + 2.5;
    ctx.globalAlpha = 0.7;
    ctx.stroke();
    ctx.globalAlpha = 1;
  }
  ctx.strokeStyle = color;
  ctx.lineWidth = width;
  ctx.setLineDash([...dash]);
  ctx.stroke();
  ctx.setLineDash([]);
  if (arrowPx === 0) return;
  traceArrows(ctx, arrowsOn(view, paths, arrowEveryPx), arrowPx);
  ctx.strokeStyle = rim;
  ctx.lineWidth = 2.5;
  ctx.stroke();
  ctx.fillStyle = color;
  ctx.fill();
}

type Path = readonly WorldPoint[];

/** On the canvas, in pixels; what lies beside it as a whole is left out. */
function pathsInView(view: View, legs: readonly RouteLeg[]): Path[] {
  const paths: Path[] = [];
  for (const { from, to, way } of legs) {
    const points = (way?.at(view.zoom) ?? [from, to]).map((point) => onScreen(view, point));
    if (isSeen(view, points)) paths.push(points);
  }
  return paths;
}

function isSeen({ width, height }: View, points: Path): boolean {
  let [left, top, right, bottom] = [Infinity, Infinity, -Infinity, -Infinity];
  for (const { x, y } of points) {
    left = Math.min(left, x);
    right = Math.max(right, x);
    top = Math.min(top, y);
    bottom = Math.max(bottom, y);
  }
  return right >= 0 && bottom >= 0 && left <= width && top <= height;
}

function trace(ctx: CanvasRenderingContext2D, paths: readonly Path[]): void {
  ctx.beginPath();
  for (const path of paths)
    path.forEach(({ x, y }, i) => (i === 0 ? ctx.moveTo(x, y) : ctx.lineTo(x, y)));
}

export interface Arrow extends WorldPoint {
  readonly angle: number;
}

/** Which way the legs go: an arrow in the middle of a short one, more along a long one. */
export function arrowsOn(view: View, paths: readonly Path[], everyPx: number): Arrow[] {
  return paths.flatMap((path) => {
    const length = lengthOf(path);
    if (length < 34) return [];
    const count = Math.max(1, Math.floor(length / everyPx));
    return Array.from({ length: count }, (_, i) => pointAlong(path, ((i + 0.5) * length) / count))
      .filter((arrow) => arrow !== null)
      .filter((arrow) => isInView(view, arrow, 10));
  });
}

const lengthOf = (path: Path): number =>
  path.reduce((sum, { x, y }, i) => {
    const before = path[i - 1];
    return before ? sum + Math.hypot(x - before.x, y - before.y) : sum;
  }, 0);

function pointAlong(path: Path, at: number): Arrow | null {
  let left = at;
  for (let i = 1; i < path.length; i++) {
    const from = path[i - 1]!;
    const to = path[i]!;
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

function traceArrows(ctx: CanvasRenderingContext2D, arrows: readonly Arrow[], size: number): void {
  ctx.beginPath();
  for (const { x, y, angle } of arrows) {
    const [dx, dy] = [Math.cos(angle) * size, Math.sin(angle) * size];
    ctx.moveTo(x + dx, y + dy);
    ctx.lineTo(x - 0.8 * dx + 0.8 * dy, y - 0.8 * dy - 0.8 * dx);
    ctx.lineTo(x - 0.8 * dx - 0.8 * dy, y - 0.8 * dy + 0.8 * dx);
    ctx.closePath();
  }
}

/** The order of the stops on the chosen route, beside their marks. */
export function paintStopNumbers(
  ctx: CanvasRenderingContext2D,
  view: View,
  shape: RouteShape,
  ink: MapInk,
): void {
  ctx.font = font(11, 600);
  ctx.textAlign = 'center';
  ctx.textBaseline = 'middle';
  for (const { to, order } of shape.legs) {
    const { x, y } = onScreen(view, to);
    const box = { x: x - 19, y: y - 21, width: 16, height: 15 };
    ctx.fillStyle = ink.accent;
    ctx.strokeStyle = ink.ground;
    ctx.lineWidth = 2;
    ctx.beginPath();
    ctx.roundRect(box.x, box.y, box.width, box.height, 3);
    ctx.stroke();
    ctx.fill();
    ctx.fillStyle = ink.onAccent;
    ctx.fillText(String(order), box.x + 8, box.y + 8);
  }
}
