import { z } from 'zod';
import { LonLat } from './common';

/** The circuits that bring power to a region's streets, as far as the region's data tells of them. */
export const FeederDto = z.strictObject({
  /** Unique in the region, and the same after every import of the same data. */
  id: z.string(),
  /** As the power company calls it: 'Heron 2'. */
  name: z.string(),
  /** Name of the substation at its head; empty when the data does not say. */
  substation: z.string(),
  /** Addresses inside. */
  customers: z.int().min(0),
  /** What it serves, as a GeoJSON MultiPolygon's coordinates; the outer ring of each part comes first. */
  polygons: z.array(z.array(z.array(LonLat).min(4))).min(1),
  /** Its main line along the streets, piece by piece; empty when the data does not say. */
  trunk: z.array(z.array(LonLat).min(2)),
  /**
   * The power company's plan for after a storm: which wave of repairs the feeder belongs to (1 is
   * first), and how many hours after the storm it expects power back. `null` when none is given.
   */
  wave: z.strictObject({ order: z.int().min(1), hours: z.number().min(0) }).nullable(),
});
export type FeederDto = z.infer<typeof FeederDto>;

export const SubstationDto = z.strictObject({ name: z.string(), at: LonLat });
export type SubstationDto = z.infer<typeof SubstationDto>;

/** Both are empty for a region whose data knows nothing of them. */
export const FeederMap = z.strictObject({
  feeders: z.array(FeederDto),
  substations: z.array(SubstationDto),
});
export type FeederMap = z.infer<typeof FeederMap>;
