import type { BodyOf } from '@shared/contract/http';
import { Refusal } from '@shared/domain/errors';
import type { LonLat } from '@shared/domain/travel/great-circle';
import type { Job } from '../commands/run-command';
import type { Context } from '../context';
import { openStorm } from '../storms/storm-queries';
import { addStormRoad } from './change-storm-roads';

/** A position that is farther from any road belongs to no road: our bound. */
const FARTHEST_ROAD_METRES = 150;
/** Half the side of the cross that stands for the place where no road is known, in degrees: some 30 m. */
const CROSS_DEGREES = 0.0003;

/**
 * A technician stands before a road that nobody passes. It is the stretch beside them between two
 * junctions, and waits for a dispatcher, who may shorten it.
 */
export async function reportStormRoad(
  job: Job,
  { region, roads }: Pick<Context, 'region' | 'roads'>,
  told: BodyOf<'reportStormRoad'>,
): Promise<{ done: true }> {
  const storm = await openStorm(job.tx);
  if (!storm) throw new Refusal('storm-closed', 'No storm is open.');
  const near = roads?.nearest(told.at) ?? null;
  const road = near && near.metres <= FARTHEST_ROAD_METRES ? near : null;
  await addStormRoad(
    job,
    storm.id,
    {
      commandId: told.stormRoadId,
      stormRoadId: told.stormRoadId,
      kind: told.kind,
      name: (road?.name ?? region.nearest([...told.at])?.label ?? 'Road without a name').slice(
        0,
        80,
      ),
      notes: told.notes,
      shape: { type: 'line', points: road ? road.line.map(([x, y]) => [x, y]) : crossAt(told.at) },
      startsAt: job.now,
      endsAt: null,
      speedShare: null,
    },
    'reported',
  );
  return { done: true };
}

/** Across whatever road there is: a line takes the roads that it is drawn across. */
function crossAt([lon, lat]: LonLat): [number, number][] {
  const d = CROSS_DEGREES;
  return [
    [lon - d, lat - d],
    [lon + d, lat + d],
    [lon + d, lat - d],
    [lon - d, lat + d],
  ];
}
