import { z } from 'zod';
import { AreaDto } from './areas';
import { CallRow } from './calls';
import { Moment } from './common';
import { StormDto } from './office';
import { PlanDto, StopDto, TechnicianDto } from './routes';
import { StormRoadDto } from './storm-roads';

/** The whole picture of a storm as of change `n` of its board's stream. */
export const BoardPicture = z.strictObject({
  n: z.int().nonnegative(),
  serverNow: Moment,
  storm: StormDto,
  calls: z.array(CallRow),
  technicians: z.array(TechnicianDto),
  /** Stops that are still to be done. */
  stops: z.array(StopDto),
  areas: z.array(AreaDto),
  /** Also those that were lifted lately, so that a lifting can be taken back. */
  stormRoads: z.array(StormRoadDto),
  /** The newest proposal that nobody has published or discarded. */
  plan: PlanDto.nullable(),
});
export type BoardPicture = z.infer<typeof BoardPicture>;
