import type { StopDto, TechnicianDto } from '@shared/contract/routes';
import { type Instant, MINUTE_MS } from '@shared/domain/instant';
import type { Box, LabelBoxes } from './label-boxes';
import { font, inkText, type MapInk } from './map-ink';
import { isInView, onScreen, toWorld, type View, type WorldPoint } from './world';

/** From here on a position is old: a van may be anywhere by now. */
export const OLD_POSITION_MINUTES = 15;

/** A technician and what is left of the route, projected once. */
export interface RouteShape {
  readonly technician: TechnicianDto;
  readonly at: WorldPoint;
  readonly initials: string;
  /** The age of the position, such as "4 min"; empty when there is none. */
  readonly age: string;
  readonly isOld: boolean;
  readonly legs: readonly {
    readonly to: WorldPoint;
    /** The technician has said yes to it. */
    readonly isFirm: boolean;
    readonly order: number;
  }[];
}

export function routeShape(
  technician: TechnicianDto,
  stops: readonly StopDto[],
  placeOf: (callId: string) => WorldPoint | null,
  now: Instant,
  ageWords: (lengthMs: number) => string,
): RouteShape {
  const { position } = technician;
  const legs = stops.flatMap((stop, i) => {
    const to = placeOf(stop.callId);
    const isFirm =
      stop.state === 'accepted' || stop.state === 'travelling' || stop.state === 'on-site';
    return to ? [{ to, isFirm, order: i + 1 }] : [];
  });
  return {
    technician,
    at: toWorld(position?.lonLat ?? technician.start),
    initials: initialsOf(technician.name),
    age: position ? ageWords(now - position.at) : '',
    isOld: !position || now - position.at > OLD_POSITION_MINUTES * MINUTE_MS,
    legs,
  };
}

/** "AR" of "Ana Ruiz", "J" of "Jo". */
export function initialsOf(name: string): string {
  const words = name.split(/\s+/).filter(Boolean);
  const [first = ''] = words;
  const last = words.length > 1 ? (words.at(-1) ?? '') : '';
  return `${[...first][0] ?? ''}${[...last][0] ?? ''}`.toUpperCase();
}

/** Straight lines from stop to stop, whole for what is accepted and broken for what is only planned. */
export function paintRoutes(
  ctx: CanvasRenderingContext2D,
  view: View,
  shapes: readonly RouteShape[],
  chosenId: string | null,
  ink: MapInk,
): void {
  for (const shape of shapes) {
    const isChosen = shape.technician.id === chosenId;
    let from = onScreen(view, shape.at);
    for (const leg of shape.legs) {
      const to = onScreen(view, leg.to);
      paintLeg(ctx, from, to, leg.isFirm, isChosen, ink);
      from = to;
    }
  }
}

function paintLeg(
  ctx: CanvasRenderingContext2D,
  from: WorldPoint,
  to: WorldPoint,
  isFirm: boolean,
  isChosen: boolean,
  ink: MapInk,
): void {
  ctx.lineCap = 'butt';
  ctx.beginPath();
  ctx.moveTo(from.x, from.y);
  ctx.lineTo(to.x, to.y);
  ctx.strokeStyle = ink.ground;
  ctx.lineWidth = isChosen ? 6 : 4;
  ctx.globalAlpha = 0.75;
  ctx.stroke();
  ctx.globalAlpha = 1;
  ctx.strokeStyle = isChosen ? ink.accent : ink.inkSoft;
  ctx.lineWidth = isChosen ? 3 : 1.5;
  ctx.setLineDash(isFirm ? [] : [5, 4]);
  ctx.stroke();
  ctx.setLineDash([]);
  paintArrow(ctx, from, to, isChosen, ink);
}

/** Which way the leg goes, in its middle; short legs show it by their order alone. */
function paintArrow(
  ctx: CanvasRenderingContext2D,
  from: WorldPoint,
  to: WorldPoint,
  isChosen: boolean,
  ink: MapInk,
): void {
  const length = Math.hypot(to.x - from.x, to.y - from.y);
  if (length < 34) return;
  const size = isChosen ? 7 : 5.5;
  ctx.save();
  ctx.translate((from.x + to.x) / 2, (from.y + to.y) / 2);
  ctx.rotate(Math.atan2(to.y - from.y, to.x - from.x));
  ctx.beginPath();
  ctx.moveTo(size, 0);
  ctx.lineTo(-size * 0.8, -size * 0.8);
  ctx.lineTo(-size * 0.8, size * 0.8);
  ctx.closePath();
  ctx.strokeStyle = ink.ground;
  ctx.lineWidth = 2.5;
  ctx.stroke();
  ctx.fillStyle = isChosen ? ink.accent : ink.inkSoft;
  ctx.fill();
  ctx.restore();
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

/**
 * A plate with initials on a foot, and the age of the position beside it: calls have letters in
 * round and edged shapes, people have plates. An old position has a broken rim.
 */
export function paintTechnicians(
  ctx: CanvasRenderingContext2D,
  view: View,
  shapes: readonly RouteShape[],
  chosenId: string | null,
  boxes: LabelBoxes,
  ink: MapInk,
): readonly { readonly technicianId: string; readonly box: Box }[] {
  const plates: { readonly technicianId: string; readonly box: Box }[] = [];
  for (const shape of shapes) {
    const { x, y } = onScreen(view, shape.at);
    if (!isInView(view, { x, y }, 40)) continue;
    const isChosen = shape.technician.id === chosenId;
    ctx.font = font(12, 600);
    const width = Math.max(24, ctx.measureText(shape.initials).width + 10);
    const box = { x: x - width / 2, y: y - 29, width, height: 20 };
    boxes.take(box);
    paintPlate(ctx, shape, { x, y }, box, isChosen, ink);
    paintAge(ctx, shape, box, boxes, ink);
    plates.push({ technicianId: shape.technician.id, box: { ...box, height: 30 } });
  }
  return plates;
}

function paintPlate(
  ctx: CanvasRenderingContext2D,
  shape: RouteShape,
  at: WorldPoint,
  box: Box,
  isChosen: boolean,
  ink: MapInk,
): void {
  const paper = isChosen ? ink.accent : ink.ink;
  const plate = new Path2D();
  plate.roundRect(box.x, box.y, box.width, box.height, 3);
  plate.moveTo(at.x - 5, box.y + box.height - 1);
  plate.lineTo(at.x, at.y);
  plate.lineTo(at.x + 5, box.y + box.height - 1);
  plate.closePath();
  ctx.lineJoin = 'round';
  ctx.strokeStyle = ink.ground;
  ctx.lineWidth = 4;
  ctx.stroke(plate);
  ctx.fillStyle = shape.isOld ? ink.ground : paper;
  ctx.fill(plate);
  if (shape.isOld) {
    ctx.strokeStyle = paper;
    ctx.lineWidth = 1.75;
    ctx.setLineDash([4, 3]);
    ctx.stroke(plate);
    ctx.setLineDash([]);
  }
  ctx.font = font(12, 600);
  ctx.textAlign = 'center';
  ctx.textBaseline = 'middle';
  ctx.fillStyle = shape.isOld ? paper : isChosen ? ink.onAccent : ink.ground;
  ctx.fillText(shape.initials, box.x + box.width / 2, box.y + box.height / 2 + 0.5);
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
