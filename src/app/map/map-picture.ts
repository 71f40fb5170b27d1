import type { LonLat } from '@shared/contract/common';
import type { CallMark } from './call-mark';
import { type Box, isInBox, LabelBoxes } from './label-boxes';
import type { MapInk } from './map-ink';
import { marksAt, type PlacedMark } from './mark-places';
import { MarkSprites } from './mark-sprites';
import type { Outline } from './outline';
import { paintRing } from './paint-calls';
import { type FeederShape, type GroundRings, paintFeeders, paintGround } from './paint-ground';
import { paintOutline } from './paint-outline';
import { paintPickedStretch } from './paint-picked-stretch';
import { paintStopNumbers } from './paint-routes';
import { EMPTY_SCENE, type MapScene } from './scene/map-scene';
import type { SceneSource } from './scene/scene-layer';
import { NO_PLACES, type ScenePlaces } from './scene/scene-orders';
import type { Paint } from './scene/top-layer';
import { onScreen, toWorld, type View, type WorldPoint } from './world';

/** What moves with the pointer and the cross-hair. */
export interface MapTop {
  readonly selected: CallMark | null;
  readonly hovered: CallMark | null;
  readonly outline: Outline | null;
  /** Ground that is about to become outage areas, from feeders or a file. */
  readonly grounds: readonly GroundRings[];
  /** To pick from; empty while none are picked. */
  readonly feeders: readonly FeederShape[];
  readonly nextCorner: LonLat | null;
  readonly pin: LonLat | null;
  /** The stretch of road that is being picked, and the places picked. */
  readonly stretch: { readonly line: readonly LonLat[]; readonly picks: readonly LonLat[] } | null;
}

const EMPTY_TOP: MapTop = {
  selected: null,
  hovered: null,
  outline: null,
  grounds: [],
  feeders: [],
  nextCorner: null,
  pin: null,
  stretch: null,
};

export type MapHit =
  | { readonly kind: 'calls'; readonly marks: readonly CallMark[] }
  | { readonly kind: 'technician'; readonly technicianId: string }
  | { readonly kind: 'pocket'; readonly pocketKey: string }
  | { readonly kind: 'area'; readonly areaId: string }
  | { readonly kind: 'storm-road'; readonly roadId: string };

/** What there is to draw, and afterwards what lies where; what moves with the pointer it draws itself. */
export class MapPicture implements SceneSource {
  scene: MapScene = EMPTY_SCENE;
  top = EMPTY_TOP;

  private known: MapInk | null = null;
  private sprites: MarkSprites | null = null;
  private spritesFor = '';
  private view: View | null = null;
  private shown: MapScene = EMPTY_SCENE;
  private places = NO_PLACES;
  private placed: readonly PlacedMark<CallMark>[] | null = null;

  constructor(private readonly readInk: () => MapInk) {}

  /** The colours have changed: everything that was drawn in them is forgotten. */
  forgetInk(): void {
    this.known = null;
    this.sprites = null;
  }

  ink(): MapInk {
    return (this.known ??= this.readInk());
  }

  /** The scene is on screen: what lies where is known from here on. */
  isShown(view: View, scene: MapScene, places: ScenePlaces): void {
    this.view = view;
    this.shown = scene;
    this.places = places;
    this.placed = null;
  }

  readonly paintTop: Paint = (view, pixelRatio) => {
    const { scene, top } = this;
    const chosen = scene.hasRoutes
      ? scene.routes.find((one) => one.technician.id === scene.chosenTechnicianId)
      : undefined;
    const isEmpty =
      !chosen &&
      top.grounds.length + top.feeders.length === 0 &&
      Object.values({ ...top, grounds: null, feeders: null }).every((one) => one === null);
    if (isEmpty) return null;
    const ink = this.ink();
    const sprites = this.spritesNow(ink, pixelRatio);
    return (ctx) => {
      if (chosen) paintStopNumbers(ctx, view, chosen, ink);
      for (const ground of top.grounds) paintGround(ctx, view, ground, ink);
      paintFeeders(ctx, view, top.feeders, new LabelBoxes(), ink);
      for (const kind of ['hovered', 'selected'] as const) {
        const mark = top[kind];
        if (mark) paintRing(ctx, view, this.placedOf(mark), kind, sprites, ink);
      }
      if (top.outline) {
        const next = top.nextCorner ? toWorld(top.nextCorner) : null;
        paintOutline(ctx, view, top.outline, next, ink);
      }
      if (top.stretch) paintPickedStretch(ctx, view, top.stretch.line, top.stretch.picks, ink);
      if (top.pin) paintPin(ctx, onScreen(view, toWorld(top.pin)), ink);
    };
  };

  /**
   * What lies under the pointer, in the order in which it was drawn: the topmost first.
   *
   * @param at pixels of the whole world
   */
  hit(at: WorldPoint, slackPx: number): MapHit | null {
    const { view } = this;
    if (!view) return null;
    const x = at.x - view.left;
    const y = at.y - view.top;
    const inBox = ({ box }: { readonly box: Box }): boolean => isInBox(box, x, y);
    const { plates, roadSigns, pocketLabels, areaLabels } = this.places;
    const plate = plates.findLast(inBox);
    if (plate) return { kind: 'technician', technicianId: plate.technicianId };
    const sign = roadSigns.findLast(inBox);
    if (sign) return { kind: 'storm-road', roadId: sign.roadId };
    const pocket = pocketLabels.find(inBox);
    if (pocket) return { kind: 'pocket', pocketKey: pocket.pocketKey };
    const near = marksAt(this.placedMarks(), view.zoom, at, slackPx);
    if (near.length > 0) return { kind: 'calls', marks: meant(near) };
    const area = areaLabels.find(inBox);
    return area ? { kind: 'area', areaId: area.areaId } : null;
  }

  private spritesNow(ink: MapInk, pixelRatio: number): MarkSprites {
    const key = String(pixelRatio);
    if (!this.sprites || this.spritesFor !== key) {
      this.sprites = new MarkSprites(ink, pixelRatio);
      this.spritesFor = key;
    }
    return this.sprites;
  }

  private placedMarks(): readonly PlacedMark<CallMark>[] {
    const { isFull, counts } = this.places.marks;
    return (this.placed ??= this.shown.marks.map((mark, i) => ({
      mark,
      isFull: isFull[i] === 1,
      count: counts[i] ?? 1,
    })));
  }

  private placedOf(mark: CallMark): PlacedMark {
    const found = this.placedMarks().find((one) => one.mark.call.id === mark.call.id);
    return found ?? { mark, isFull: false, count: 1 };
  }
}

/** A full mark on top means itself and its house; dots beside each other mean all of them. */
function meant(near: readonly PlacedMark<CallMark>[]): readonly CallMark[] {
  const [first] = near;
  if (!first) return [];
  const sameHouse = near.filter(
    ({ mark }) => Math.abs(mark.x - first.mark.x) < 2e-7 && Math.abs(mark.y - first.mark.y) < 2e-7,
  );
  const chosen = first.isFull ? sameHouse : near;
  return chosen.map(({ mark }) => mark);
}

function paintPin(ctx: CanvasRenderingContext2D, { x, y }: WorldPoint, ink: MapInk): void {
  const pin = new Path2D(
    `M${x} ${y}C${x - 3} ${y - 9} ${x - 10} ${y - 13} ${x - 10} ${y - 20}` +
      `A10 10 0 0 1 ${x + 10} ${y - 20}C${x + 10} ${y - 13} ${x + 3} ${y - 9} ${x} ${y}Z`,
  );
  ctx.lineJoin = 'round';
  ctx.strokeStyle = ink.ground;
  ctx.lineWidth = 5;
  ctx.stroke(pin);
  ctx.fillStyle = ink.accent;
  ctx.fill(pin);
  ctx.beginPath();
  ctx.arc(x, y - 20, 3.5, 0, 2 * Math.PI);
  ctx.fillStyle = ink.ground;
  ctx.fill();
}
