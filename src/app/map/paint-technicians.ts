import type { Box, LabelBoxes } from './label-boxes';
import { font, inkText, type MapInk } from './map-ink';
import type { RouteShape } from './route-shape';
import { isInView, onScreen, type View, type WorldPoint } from './world';

/** Farther out, plates are smaller and the ages of positions are left to the popover. */
const FULL_FROM_ZOOM = 12;
/** How far above the position a plate stands by itself. */
const FOOT_PX = 9;

export interface Plate {
  readonly technicianId: string;
  readonly box: Box;
}

/**
 * A plate with initials on a foot, and the age of the position beside it: calls have letters in
 * round and edged shapes, people have plates. An old position has a broken rim. Plates give way to
 * each other, and where there is no room a peg stands for one; who is chosen always has a plate.
 */
export function paintTechnicians(
  ctx: CanvasRenderingContext2D,
  view: View,
  shapes: readonly RouteShape[],
  chosenId: string | null,
  boxes: LabelBoxes,
  ink: MapInk,
): readonly Plate[] {
  const isFull = view.zoom >= FULL_FROM_ZOOM;
  const textFont = font(isFull ? 12 : 10.5, 600);
  const isChosen = ({ technician }: RouteShape): boolean => technician.id === chosenId;
  const inSight = shapes
    .map((shape) => ({ shape, at: onScreen(view, shape.at) }))
    .filter(({ at }) => isInView(view, at, 40))
    .sort((a, b) => Number(isChosen(b.shape)) - Number(isChosen(a.shape)));
  const standing: Standing[] = [];
  const pegs: { shape: RouteShape; at: WorldPoint }[] = [];
  ctx.font = textFont;
  for (const { shape, at } of inSight) {
    const width = Math.max(isFull ? 24 : 20, ctx.measureText(shape.initials).width + 8);
    const box = boxes.takeFirst(placesOf(at, width, isFull ? 20 : 16));
    if (box) standing.push({ shape, at, box });
    else pegs.push({ shape, at });
  }
  uncrossFeet(standing);
  const plates: Plate[] = [];
  for (const { shape, at } of pegs) {
    paintPeg(ctx, at, shape.isOld, ink);
    plates.push({ technicianId: shape.technician.id, box: around(at, 6) });
  }
  // The chosen one was placed first and is drawn last.
  for (const { shape, at, box } of standing.reverse()) {
    paintPlate(ctx, shape, at, box, isChosen(shape), textFont, ink);
    if (isFull || isChosen(shape)) paintAge(ctx, shape, box, boxes, ink);
    plates.push({ technicianId: shape.technician.id, box });
  }
  return plates;
}

interface Standing {
  readonly shape: RouteShape;
  readonly at: WorldPoint;
  box: Box;
}

/** Two whose feet cross change places: each then stands nearer to its own position. */
function uncrossFeet(standing: readonly Standing[]): void {
  // Each exchange shortens the feet, so this ends; the bound is for feet of equal length.
  for (let round = 0; round < standing.length; round++) {
    let isSettled = true;
    for (const [i, one] of standing.entries())
      for (const other of standing.slice(i + 1)) {
        if (!feetCross(one, other)) continue;
        [one.box, other.box] = [other.box, one.box];
        isSettled = false;
      }
    if (isSettled) return;
  }
}

function feetCross(one: Standing, other: Standing): boolean {
  const [a, b] = [one.at, middleOf(one.box)];
  const [c, d] = [other.at, middleOf(other.box)];
  return side(a, b, c) !== side(a, b, d) && side(c, d, a) !== side(c, d, b);
}

const side = (from: WorldPoint, to: WorldPoint, point: WorldPoint): boolean =>
  (to.x - from.x) * (point.y - from.y) > (to.y - from.y) * (point.x - from.x);

const middleOf = ({ x, y, width, height }: Box): WorldPoint => ({
  x: x + width / 2,
  y: y + height / 2,
});

const around = ({ x, y }: WorldPoint, half: number): Box => ({
  x: x - half,
  y: y - half,
  width: 2 * half,
  height: 2 * half,
});

/** Above the position, then farther up and to the sides, never so far that one cannot tell whose it is. */
function placesOf({ x, y }: WorldPoint, width: number, height: number): Box[] {
  const side = width / 2 + 9;
  return (
    [
      [0, -FOOT_PX - height],
      [side, -FOOT_PX - height / 2],
      [-side, -FOOT_PX - height / 2],
      [0, FOOT_PX],
      [side, 4],
      [-side, 4],
      [0, -FOOT_PX - 2 * height - 3],
      [side + 12, -FOOT_PX - 1.6 * height],
      [-side - 12, -FOOT_PX - 1.6 * height],
      [0, FOOT_PX + height + 3],
    ] as const
  ).map(([dx, dy]) => ({ x: x + dx - width / 2, y: y + dy, width, height }));
}

function paintPeg(
  ctx: CanvasRenderingContext2D,
  { x, y }: WorldPoint,
  isOld: boolean,
  ink: MapInk,
): void {
  ctx.beginPath();
  ctx.rect(x - 4, y - 4, 8, 8);
  ctx.strokeStyle = ink.ground;
  ctx.lineWidth = 3.5;
  ctx.stroke();
  ctx.fillStyle = isOld ? ink.ground : ink.ink;
  ctx.fill();
  ctx.strokeStyle = ink.ink;
  ctx.lineWidth = 1.5;
  ctx.stroke();
}

function paintPlate(
  ctx: CanvasRenderingContext2D,
  shape: RouteShape,
  at: WorldPoint,
  box: Box,
  isChosen: boolean,
  textFont: string,
  ink: MapInk,
): void {
  const paper = isChosen ? ink.accent : ink.ink;
  const foot = footOf(at, box);
  const plate = new Path2D();
  plate.roundRect(box.x, box.y, box.width, box.height, 3);
  ctx.lineJoin = 'round';
  // The plate lies on its foot, whose edges must not run through the letters.
  for (const part of [foot, plate]) {
    ctx.strokeStyle = ink.ground;
    ctx.lineWidth = 4;
    ctx.stroke(part);
  }
  for (const part of [foot, plate]) {
    if (shape.isOld) {
      ctx.strokeStyle = paper;
      ctx.lineWidth = 3.5;
      ctx.setLineDash([4, 3]);
      ctx.stroke(part);
      ctx.setLineDash([]);
    }
    ctx.fillStyle = shape.isOld ? ink.ground : paper;
    ctx.fill(part);
  }
  ctx.font = textFont;
  ctx.textAlign = 'center';
  ctx.textBaseline = 'middle';
  ctx.fillStyle = shape.isOld ? paper : isChosen ? ink.onAccent : ink.ground;
  ctx.fillText(shape.initials, box.x + box.width / 2, box.y + box.height / 2 + 0.5);
}

/** From the plate's nearest edge to the position. */
function footOf(at: WorldPoint, box: Box): Path2D {
  const foot = new Path2D();
  const middle = middleOf(box);
  const length = Math.hypot(at.x - middle.x, at.y - middle.y) || 1;
  const across = {
    x: (-(at.y - middle.y) / length) * 5,
    y: ((at.x - middle.x) / length) * 5,
  };
  const inside = {
    x: Math.min(box.x + box.width - 5, Math.max(box.x + 5, at.x)),
    y: Math.min(box.y + box.height - 5, Math.max(box.y + 5, at.y)),
  };
  foot.moveTo(inside.x + across.x, inside.y + across.y);
  foot.lineTo(at.x, at.y);
  foot.lineTo(inside.x - across.x, inside.y - across.y);
  foot.closePath();
  return foot;
}

function paintAge(
  ctx: CanvasRenderingContext2D,
  { age }: RouteShape,
  plate: Box,
  boxes: LabelBoxes,
  ink: MapInk,
): void {
  if (age === '') return;
  ctx.font = font(11, 500);
  ctx.textAlign = 'left';
  ctx.textBaseline = 'middle';
  const width = ctx.measureText(age).width + 6;
  const box = boxes.takeFirst(
    [plate.x + plate.width + 2, plate.x - width].map((x) => ({
      x,
      y: plate.y + 2,
      width,
      height: 16,
    })),
  );
  if (box) inkText(ctx, age, box.x + 3, box.y + 8.5, ink.ink, ink.ground);
}
