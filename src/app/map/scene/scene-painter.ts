import { paintAreaLabels } from '../area-labels';
import type { DrawnMark } from '../call-mark';
import { type Box, LabelBoxes } from '../label-boxes';
import type { MapInk } from '../map-ink';
import { type PlacedMark, placeMarks } from '../mark-places';
import { MarkSprites } from '../mark-sprites';
import { makeHatch, paintAreas } from '../paint-areas';
import { paintCalls, paintDots } from '../paint-calls';
import { paintPocketLabels, paintPockets } from '../paint-pockets';
import { paintProposal, paintRoutes } from '../paint-routes';
import { makeStormRoadPatterns, paintStormRoads } from '../paint-storm-roads';
import { paintTechnicians } from '../paint-technicians';
import { paintStormRoadSigns } from '../storm-road-signs';
import { paintTowns } from '../paint-towns';
import type { View } from '../world';
import type { MapScene } from './map-scene';
import type { ScenePlaces } from './scene-orders';

/** Draws a scene in one set of colours; the pictures and patterns that it copies are made once. */
export class ScenePainter {
  private readonly sprites: MarkSprites;
  private readonly hatch: CanvasPattern | null;
  private readonly roadPatterns: ReturnType<typeof makeStormRoadPatterns>;
  private placed: readonly PlacedMark[] = [];
  private placedFor: { readonly marks: readonly DrawnMark[]; readonly zoom: number } | null = null;

  constructor(
    private readonly ctx: CanvasRenderingContext2D,
    private readonly ink: MapInk,
    readonly pixelRatio: number,
  ) {
    this.sprites = new MarkSprites(ink, pixelRatio);
    this.hatch = makeHatch(ctx, ink);
    this.roadPatterns = makeStormRoadPatterns(ctx, ink);
  }

  /** What is asked for first lies lowest. @returns what lies where afterwards */
  paint(scene: MapScene<DrawnMark>, view: View): ScenePlaces {
    const { ctx, ink, sprites } = this;
    const { routes, pockets, areas, stormRoads, chosenTechnicianId, chosenPocketKey } = scene;
    const boxes = new LabelBoxes();
    boxes.reserve(controlsBox(view));
    paintPockets(ctx, view, pockets, chosenPocketKey, ink);
    paintAreas(ctx, view, areas, this.hatch, ink);
    if (scene.hasRoutes) paintRoutes(ctx, view, routes, chosenTechnicianId, ink);
    paintProposal(ctx, view, scene.proposal, chosenTechnicianId, ink);
    paintStormRoads(ctx, view, stormRoads, this.roadPatterns, ink);
    const placed = this.placedAt(scene.marks, view.zoom);
    paintDots(ctx, view, placed, sprites);
    paintCalls(ctx, view, placed, sprites, ink);
    const plates = scene.hasTechnicians
      ? paintTechnicians(ctx, view, routes, chosenTechnicianId, boxes, ink)
      : [];
    const roadSigns = paintStormRoadSigns(ctx, view, stormRoads, boxes, ink);
    paintTowns(ctx, view, scene.towns, placed, boxes, ink);
    return {
      marks: {
        isFull: Uint8Array.from(placed, ({ isFull }) => Number(isFull)),
        counts: Uint16Array.from(placed, ({ count }) => count),
      },
      plates,
      roadSigns,
      pocketLabels: paintPocketLabels(ctx, view, pockets, chosenPocketKey, boxes, ink),
      areaLabels: paintAreaLabels(ctx, view, areas, boxes, ink),
    };
  }

  private placedAt(marks: readonly DrawnMark[], zoom: number): readonly PlacedMark[] {
    const whole = Math.round(zoom);
    if (this.placedFor?.marks !== marks || this.placedFor.zoom !== whole) {
      this.placed = placeMarks(marks, whole);
      this.placedFor = { marks, zoom: whole };
    }
    return this.placed;
  }
}

/** The map's zoom keys and its foot, which lie over the lower right corner of the window. */
const controlsBox = ({ width, height, margin }: View): Box => ({
  x: width - margin - CONTROLS_PX.width,
  y: height - margin - CONTROLS_PX.height,
  ...CONTROLS_PX,
});
const CONTROLS_PX = { width: 52, height: 136 };

export const isNothing = (scene: MapScene<DrawnMark>): boolean =>
  scene.marks.length +
    scene.areas.length +
    scene.stormRoads.length +
    scene.pockets.length +
    scene.towns.length +
    scene.proposal.length ===
    0 &&
  ((!scene.hasRoutes && !scene.hasTechnicians) || scene.routes.length === 0);
