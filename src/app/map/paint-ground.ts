import type { FeederDto } from '@shared/contract/feeders';
import type { OutageShape } from '@shared/domain/outage-shape';
import type { LabelBoxes } from './label-boxes';
import { font, inkText, type MapInk } from './map-ink';
import { boundsOf, traceRings } from './paint-areas';
import { onScreen, toWorld, type View, type WorldPoint } from './world';

/** The rings of a shape, projected once. */
export type GroundRings = readonly (readonly WorldPoint[])[];

export const groundRings = (shape: OutageShape): GroundRings =>
  shape.flat().map((ring) => ring.map(toWorld));

/** A feeder that can be picked. */
export interface FeederShape {
  readonly feeder: FeederDto;
  readonly rings: GroundRings;
  readonly isChosen: boolean;
}

/** Projected once for each feeder, whatever is chosen. */
const rings = new WeakMap<FeederDto, GroundRings>();

export function feederShape(feeder: FeederDto, isChosen: boolean): FeederShape {
  const known = rings.get(feeder) ?? groundRings(feeder.polygons);
  rings.set(feeder, known);
  return { feeder, rings: known, isChosen };
}

/** Ground that is about to become an outage area, taken as a whole: without handles. */
export function paintGround(
  ctx: CanvasRenderingContext2D,
  view: View,
  ground: GroundRings,
  ink: MapInk,
): void {
  traceRings(ctx, view, ground);
  ctx.lineJoin = 'round';
  ctx.strokeStyle = ink.ground;
  ctx.lineWidth = 6;
  ctx.stroke();
  ctx.strokeStyle = ink.accent;
  ctx.lineWidth = 3;
  ctx.stroke();
  ctx.globalAlpha = 0.12;
  ctx.fillStyle = ink.accent;
  ctx.fill('evenodd');
  ctx.globalAlpha = 1;
}

/** Feeders to pick from: thin borders, those that are chosen with a tick before the name. */
export function paintFeeders(
  ctx: CanvasRenderingContext2D,
  view: View,
  shapes: readonly FeederShape[],
  boxes: LabelBoxes,
  ink: MapInk,
): void {
  ctx.lineJoin = 'round';
  for (const { rings: ground } of shapes) {
    traceRings(ctx, view, ground);
    ctx.strokeStyle = ink.ground;
    ctx.lineWidth = 3;
    ctx.globalAlpha = 0.7;
    ctx.stroke();
    ctx.globalAlpha = 1;
    ctx.strokeStyle = ink.inkSoft;
    ctx.lineWidth = 1.25;
    ctx.stroke();
  }
  ctx.textAlign = 'center';
  ctx.textBaseline = 'middle';
  // The chosen ones have their names first.
  for (const { feeder, rings: ground, isChosen } of [...shapes].sort(chosenFirst)) {
    const { left, right, top, bottom } = boundsOf(
      (ground[0] ?? []).map((point) => onScreen(view, point)),
    );
    if (right < 0 || bottom < 0 || left > view.width || top > view.height) continue;
    const text = isChosen ? `✓ ${feeder.name}` : feeder.name;
    ctx.font = font(12, isChosen ? 600 : 500);
    const width = ctx.measureText(text).width + 6;
    if (!isChosen && width > right - left) continue;
    const [x, y] = [(left + right) / 2, (top + bottom) / 2];
    const box = { x: x - width / 2, y: y - 8, width, height: 16 };
    if (boxes.take(box)) inkText(ctx, text, x, y, isChosen ? ink.accent : ink.ink, ink.ground);
  }
}

const chosenFirst = (a: FeederShape, b: FeederShape): number =>
  Number(b.isChosen) - Number(a.isChosen);
