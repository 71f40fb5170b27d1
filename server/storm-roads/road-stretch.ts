import type { RoadStretch } from '@shared/contract/storm-roads';
import { USUAL_CONDITIONS } from '@shared/domain/roads/conditions';
import { lengthKm } from '@shared/domain/storm-roads';
import type { LonLat } from '@shared/domain/travel/great-circle';
import type { Context } from '../context';
import type { RoadLeg } from '../workers/ports';

/** A click that is farther from any road means no road: our bound. */
const FARTHEST_METRES = 500;
/** The contract's bound on the points of a line. */
const MOST_POINTS = 2000;

type Stretch = RoadStretch['stretch'];

/**
 * The road beside a point, from one junction to the next; with a second point the way between the two as
 * on a day without a storm, for a closed road must be seen to be closed again.
 */
export async function roadStretch(
  { roads }: Pick<Context, 'roads'>,
  from: LonLat,
  to: LonLat | null,
): Promise<Stretch> {
  const near = roads?.nearest(from) ?? null;
  if (!roads || !near || near.metres > FARTHEST_METRES) return null;
  if (to === null)
    return {
      points: sent(near.line),
      name: near.name,
      metres: Math.round(lengthKm(near.line) * 1000),
    };
  // A one-way street is closed all the same when its ends are picked against its direction.
  const [there] = await roads.path([from, to], USUAL_CONDITIONS);
  const [back] = await roads.path([to, from], USUAL_CONDITIONS);
  const leg = shorter(there ?? null, back ?? null);
  if (!leg || leg.line.length > MOST_POINTS) return null;
  return { points: sent(leg.line), name: near.name, metres: Math.round(leg.metres) };
}

function shorter(a: RoadLeg | null, b: RoadLeg | null): RoadLeg | null {
  if (!a || !b) return a ?? b;
  return a.metres <= b.metres ? a : b;
}

const sent = (line: readonly LonLat[]): [number, number][] => line.map(([lon, lat]) => [lon, lat]);
