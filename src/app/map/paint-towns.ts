import type { TownDto } from '@shared/contract/areas';
import type { Box, LabelBoxes } from './label-boxes';
import { font, inkText, type MapInk } from './map-ink';
import type { PlacedMark } from './mark-places';
import { MARK_RADIUS } from './mark-places';
import { TOWN_NAMES_MAX_ZOOM } from './tiles/map-zoom';
import { isInView, onScreen, toWorld, type View, type WorldPoint } from './world';

/** A town's name where the map sets it. */
export interface TownMark {
  readonly name: string;
  readonly kind: TownDto['kind'];
  readonly at: WorldPoint;
}

export const townMark = ({ name, kind, at }: TownDto): TownMark => ({
  name,
  kind,
  at: toWorld(at),
});

/** The farthest zoom at which a kind of town is named, and how large. */
const LOOKS: Readonly<
  Record<TownDto['kind'], { readonly minZoom: number; readonly px: number; weight: 500 | 600 }>
> = {
  city: { minZoom: 9, px: 16, weight: 600 },
  town: { minZoom: 10, px: 13, weight: 600 },
  village: { minZoom: 11, px: 12, weight: 500 },
};

/** How far above or below its town a name may stand and still be taken for it, in lines. */
const LINES_AWAY = [0, -1, 1, -1.8, 1.8] as const;

/**
 * Calls lie over the middle of every town, and would cover a name that is a part of the tiles: towns
 * are named here instead, beside the marks, and before the labels of areas.
 */
export function paintTowns(
  ctx: CanvasRenderingContext2D,
  view: View,
  towns: readonly TownMark[],
  marks: readonly PlacedMark[],
  boxes: LabelBoxes,
  ink: MapInk,
): void {
  const zoom = Math.round(view.zoom);
  if (zoom > TOWN_NAMES_MAX_ZOOM) return;
  const inSight = towns
    .filter(({ kind }) => zoom >= LOOKS[kind].minZoom)
    .map((town) => ({ town, at: onScreen(view, town.at) }))
    .filter(({ at }) => isInView(view, at, 60));
  if (inSight.length === 0) return;
  const full = marks
    .filter(({ isFull }) => isFull)
    .map(({ mark }) => ({ at: onScreen(view, mark), radius: MARK_RADIUS[mark.press] }))
    .filter(({ at }) => isInView(view, at, 20));
  ctx.textAlign = 'center';
  ctx.textBaseline = 'middle';
  for (const { town, at } of inSight) {
    const { px, weight } = LOOKS[town.kind];
    ctx.font = font(px, weight);
    const width = ctx.measureText(town.name).width + 4;
    const height = px + 3;
    const places = LINES_AWAY.map((lines) => ({
      x: at.x - width / 2,
      y: at.y - height / 2 + lines * height,
      width,
      height,
    }));
    const clear = places.filter((box) => !full.some((mark) => covers(box, mark)));
    const box = boxes.takeFirst([...clear, ...places]);
    if (box) inkText(ctx, town.name, at.x, box.y + height / 2, ink.inkSoft, ink.ground);
  }
}

const covers = (box: Box, { at, radius }: { at: WorldPoint; radius: number }): boolean =>
  at.x + radius > box.x &&
  at.x - radius < box.x + box.width &&
  at.y + radius > box.y &&
  at.y - radius < box.y + box.height;
