import { font, type MapInk } from './map-ink';
import type { ProposedRoute, RouteLeg, RouteShape } from './route-shape';
import { lengthOf, pointAlong, type PointOnLine, type ScreenLine, traceLines } from './screen-line';
import { isInView, onScreen, type View } from './world';

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

/**
 * Along the roads, whole for what is accepted and broken for what is only planned; the chosen route
 * last, wider and in the accent's colour.
 */
export function paintRoutes(
  ctx: CanvasRenderingContext2D,
  view: View,
  shapes: readonly RouteShape[],
  chosenId: string | null,
  ink: MapInk,
): void {
  const isFar = view.zoom < ARROWS_FROM_ZOOM;
  for (const isChosen of [false, true]) {
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
    for (const [group, dash] of groups) paintLegs(ctx, view, group, { ...look, dash }, ink.ground);
  }
}

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
    traceLines(ctx, paths);
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
  traceLines(ctx, paths);
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

/** On the canvas, in pixels; what lies beside it as a whole is left out. */
function pathsInView(view: View, legs: readonly RouteLeg[]): ScreenLine[] {
  const paths: ScreenLine[] = [];
  for (const { from, to, way } of legs) {
    const points = (way?.at(view.zoom) ?? [from, to]).map((point) => onScreen(view, point));
    if (isSeen(view, points)) paths.push(points);
  }
  return paths;
}

function isSeen({ width, height }: View, points: ScreenLine): boolean {
  let [left, top, right, bottom] = [Infinity, Infinity, -Infinity, -Infinity];
  for (const { x, y } of points) {
    left = Math.min(left, x);
    right = Math.max(right, x);
    top = Math.min(top, y);
    bottom = Math.max(bottom, y);
  }
  return right >= 0 && bottom >= 0 && left <= width && top <= height;
}

/** Which way the legs go: an arrow in the middle of a short one, more along a long one. */
export function arrowsOn(view: View, paths: readonly ScreenLine[], everyPx: number): PointOnLine[] {
  return paths.flatMap((path) => {
    const length = lengthOf(path);
    if (length < 34) return [];
    const count = Math.max(1, Math.floor(length / everyPx));
    return Array.from({ length: count }, (_, i) => pointAlong(path, ((i + 0.5) * length) / count))
      .filter((arrow) => arrow !== null)
      .filter((arrow) => isInView(view, arrow, 10));
  });
}

function traceArrows(
  ctx: CanvasRenderingContext2D,
  arrows: readonly PointOnLine[],
  size: number,
): void {
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
