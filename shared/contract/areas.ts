import { z } from 'zod';
import { MOST_SHAPE_POINTS } from '@shared/domain/outage-shape';
import { Command, filledLine, Id, LonLat, Moment, Version, VersionedCommand } from './common';

/** A closed ring in GeoJSON's order; the last point repeats the first. */
export const Ring = z
  .array(LonLat)
  .min(4)
  .max(MOST_SHAPE_POINTS)
  .refine((ring) => {
    const [first, last] = [ring[0], ring.at(-1)];
    return first?.[0] === last?.[0] && first?.[1] === last?.[1];
  }, 'The outline is not closed.');

/** The coordinates of a GeoJSON MultiPolygon: parts, each of an outer ring and the holes in it. */
export const AreaShape = z
  .array(z.array(Ring).min(1).max(200))
  .min(1)
  .max(200)
  .refine(
    (shape) => shape.flat().reduce((sum, ring) => sum + ring.length, 0) <= MOST_SHAPE_POINTS,
    `The outline has more than ${String(MOST_SHAPE_POINTS)} points.`,
  );
export type AreaShape = z.infer<typeof AreaShape>;

export const AreaDto = z.strictObject({
  id: Id,
  stormId: Id,
  name: z.string(),
  shape: AreaShape,
  outAt: Moment,
  /** `null`: still out. */
  backAt: Moment.nullable(),
  version: Version,
});
export type AreaDto = z.infer<typeof AreaDto>;

export const DrawArea = Command.extend({
  areaId: Id,
  name: filledLine(80),
  shape: AreaShape,
  outAt: Moment,
  backAt: Moment.nullable(),
});
export const ChangeArea = VersionedCommand.extend({
  name: filledLine(80).optional(),
  shape: AreaShape.optional(),
  outAt: Moment.optional(),
  backAt: Moment.nullable().optional(),
});
export const RemoveArea = VersionedCommand;

/** The ground of some feeders, their ids parted by commas. */
export const FeederShapeQuery = z.strictObject({ ids: z.string().min(1).max(4000) });
export const FeederShape = z.strictObject({ shape: AreaShape });

export const PocketDto = z.strictObject({
  key: z.string(),
  name: z.string(),
  callIds: z.array(Id),
  centre: LonLat,
  hull: z.array(LonLat),
  valueAtRiskCents: z.int(),
  nextSaveByAt: Moment.nullable(),
});
export type PocketDto = z.infer<typeof PocketDto>;

/** A place whose name is known to everybody in the county. */
export const TownDto = z.strictObject({
  name: z.string(),
  kind: z.enum(['city', 'town', 'village']),
  at: LonLat,
});
export type TownDto = z.infer<typeof TownDto>;

export const RegionDto = z.strictObject({
  id: z.string(),
  name: z.string(),
  /** West, south, east, north. */
  bbox: z.tuple([z.number(), z.number(), z.number(), z.number()]),
  centre: LonLat,
  timeZone: z.string(),
  attribution: z.string(),
  /** With {z}, {x} and {y}. */
  tilesUrl: z.string(),
  /** House numbers, shown from zoom 17; `null` if the region has none. */
  houseNumbersUrl: z.string().nullable(),
  hasCoast: z.boolean(),
  addressCount: z.int(),
  /** The largest first. */
  towns: z.array(TownDto),
});
export type RegionDto = z.infer<typeof RegionDto>;
