import { z } from 'zod';
import { AreaDto } from './areas';
import { CallRow } from './calls';
import { Id, Moment } from './common';
import { StormDto } from './office';
import { PlanDto, StopDto, TechnicianDto } from './routes';
import { StormRoadDto } from './storm-roads';

/** What the automatic mode published last (`shared/domain/automatic-done.ts`). */
const AutomaticDone = z.strictObject({
  planId: Id,
  at: Moment,
  because: z.string(),
  gainCents: z.int(),
  moved: z.int(),
});

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
  /** `null` when a person published the routes in force, or nobody did. */
  automaticDone: AutomaticDone.nullable(),
});
export type BoardPicture = z.infer<typeof BoardPicture>;
