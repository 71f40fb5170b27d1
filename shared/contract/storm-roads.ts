import { z } from 'zod';
import { STORM_ROAD_KINDS } from '../domain/roads/conditions';
import { LEAST_SPEED_SHARE, MOST_SPEED_SHARE, STORM_ROAD_STATES } from '../domain/storm-roads';
import { Ring } from './areas';
import {
  Command,
  filledLine,
  Id,
  LonLat,
  Moment,
  prose,
  Version,
  VersionedCommand,
} from './common';

export const StormRoadShape = z.discriminatedUnion('type', [
  /** A stretch of road as it runs, or as good as the one who drew it knew. */
  z.strictObject({ type: z.literal('line'), points: z.array(LonLat).min(2).max(2000) }),
  z.strictObject({ type: z.literal('area'), ring: Ring }),
]);
export type StormRoadShape = z.infer<typeof StormRoadShape>;

const SpeedShare = z.number().min(LEAST_SPEED_SHARE).max(MOST_SPEED_SHARE);

/** A road as the storm has left it: closed, flooded, or slow. */
export const StormRoadDto = z.strictObject({
  id: Id,
  stormId: Id,
  kind: z.enum(STORM_ROAD_KINDS),
  state: z.enum(STORM_ROAD_STATES),
  name: z.string(),
  notes: z.string(),
  shape: StormRoadShape,
  startsAt: Moment,
  /** `null`: until further notice. */
  endsAt: Moment.nullable(),
  /** Of the usual speed, for a slow road; `null` for one that nobody passes. */
  speedShare: SpeedShare.nullable(),
  /** Who put it on the map, and when. */
  by: z.string(),
  at: Moment,
  liftedAt: Moment.nullable(),
  /** Whether its latest change can be taken back. */
  canUndo: z.boolean(),
  version: Version,
});
export type StormRoadDto = z.infer<typeof StormRoadDto>;

const content = {
  kind: z.enum(STORM_ROAD_KINDS),
  name: filledLine(80),
  notes: prose(500),
  shape: StormRoadShape,
  startsAt: Moment,
  endsAt: Moment.nullable(),
  speedShare: SpeedShare.nullable(),
};
export const AddStormRoad = Command.extend({ stormRoadId: Id, ...content });
export type AddStormRoad = z.infer<typeof AddStormRoad>;
export const ChangeStormRoad = VersionedCommand.extend(z.strictObject(content).partial().shape);
export type ChangeStormRoad = z.infer<typeof ChangeStormRoad>;
/** Confirming a report, lifting, and taking the latest change back need no more than the version. */
export const ConfirmStormRoad = VersionedCommand;
export const LiftStormRoad = VersionedCommand;
export const UndoStormRoad = VersionedCommand;
/** A piece of road as it runs. `null`: there is none near, or no way leads between the points. */
export const RoadStretch = z.strictObject({
  stretch: z
    .strictObject({
      points: z.array(LonLat),
      /** `null` for a road without a name. */
      name: z.string().nullable(),
      metres: z.number(),
    })
    .nullable(),
});
export type RoadStretch = z.infer<typeof RoadStretch>;
/** What an undo leaves: the road as it was before, or nothing when it was new. */
export const StormRoadUndone = z.strictObject({ road: StormRoadDto.nullable() });

/** A technician stands before it. A dispatcher looks at it before any route goes round. */
export const ReportStormRoad = Command.extend({
  stormRoadId: Id,
  kind: z.enum(['closed', 'flooded']),
  at: LonLat,
  notes: prose(500),
});
