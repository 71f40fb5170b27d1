import { z } from 'zod';
import { LonLat } from './common';

/** As many drives as are asked about at once. */
export const MOST_ROAD_LINES = 40;

const degrees = z.coerce.number<string>();
const Drive = z
  .string()
  .transform((text) => text.split(','))
  .pipe(z.tuple([degrees, degrees, degrees, degrees]))
  .transform(([fromLon, fromLat, toLon, toLat]): [[number, number], [number, number]] => [
    [fromLon, fromLat],
    [toLon, toLat],
  ])
  .pipe(z.tuple([LonLat, LonLat]));

/** Drives as "lon,lat,lon,lat", parted by semicolons. */
export const RoadLinesQuery = z.strictObject({
  drives: z
    .string()
    .transform((text) => text.split(';'))
    .pipe(z.array(Drive).min(1).max(MOST_ROAD_LINES)),
});

export const RoadLines = z.strictObject({
  /** In the order of the drives. `null`: the region has no roads, or none leads there. */
  lines: z.array(z.array(LonLat).min(2).nullable()),
});
