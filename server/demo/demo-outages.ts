import type { AreaShape } from '@shared/contract/areas';
import type { FeederDto, FeederMap } from '@shared/contract/feeders';
import type { LonLat } from '@shared/contract/common';
import { lastBack } from '@shared/domain/outage-area';
import { shapeFinder } from '@shared/domain/outage-shape';
import { HOUR_MS, MINUTE_MS, type Instant } from '@shared/domain/instant';
import { shapeOfFeeders } from '../areas/feeder-shape';
import type { Chance } from './demo-calls';

/** An area that the demo's storm left without power. */
export interface DemoOutage {
  readonly name: string;
  readonly shape: AreaShape;
  readonly outAt: Instant;
  /** `null`: still out. */
  readonly backAt: Instant | null;
}

/** Shares of the feeders that fail, on the storm's side of the county and behind it. */
const FAILS_IN_THE_EAST = 0.5;
const FAILS_IN_THE_WEST = 0.32;
/** The substation that tripped as a whole is back in service after so many hours. */
const TRIPPED_FOR = 4.5;

/**
 * What failed: feeders, more of them in the east where the storm came from, and one whole
 * substation, which was back soon, while some of the feeders inside stayed out for longer. Power
 * came back by the waves of the power company's plan; what the plan puts after `now` is still out.
 */
export function demoOutages(
  power: FeederMap,
  chance: Chance,
  wentOut: Instant,
  now: Instant,
): DemoOutage[] {
  const planned = power.feeders.filter(({ wave }) => wave !== null);
  const middle = medianOf(planned.map(eastingOf));
  const failed = planned.filter(
    (feeder) =>
      chance.next() < (eastingOf(feeder) > middle ? FAILS_IN_THE_EAST : FAILS_IN_THE_WEST),
  );
  const outages = failed.map((feeder): DemoOutage => {
    const outAt = wentOut + chance.below(50) * MINUTE_MS;
    const backAt = outAt + (feeder.wave?.hours ?? 0) * HOUR_MS;
    return {
      name: feeder.name,
      shape: shapeOfFeeders(power, [feeder.id]),
      outAt,
      backAt: backAt > now - HOUR_MS / 2 ? null : backAt,
    };
  });
  const tripped = mostHit(failed);
  if (tripped !== null) {
    const inside = power.feeders.filter(({ substation }) => substation === tripped);
    outages.push({
      name: tripped,
      shape: shapeOfFeeders(
        power,
        inside.map(({ id }) => id),
      ),
      outAt: wentOut,
      backAt: wentOut + TRIPPED_FOR * HOUR_MS,
    });
  }
  return outages.sort(
    (a, b) => (a.backAt ?? Infinity) - (b.backAt ?? Infinity) || a.outAt - b.outAt,
  );
}

/** The outage that counts at a place, as areas that overlap are read everywhere. */
export function outageFinder<A extends DemoOutage>(
  outages: readonly A[],
): (at: LonLat) => A | null {
  const around = shapeFinder(outages);
  return (at) => lastBack(around(at));
}

const eastingOf = ({ polygons }: FeederDto): number => {
  const lons = polygons.flat(2).map(([lon]) => lon);
  return (Math.min(...lons) + Math.max(...lons)) / 2;
};

const medianOf = (values: readonly number[]): number =>
  [...values].sort((a, b) => a - b)[values.length >> 1] ?? 0;

/** The substation with the most failed feeders. */
function mostHit(failed: readonly FeederDto[]): string | null {
  const counts = new Map<string, number>();
  for (const { substation } of failed)
    if (substation) counts.set(substation, (counts.get(substation) ?? 0) + 1);
  const [most] = [...counts].sort((a, b) => b[1] - a[1] || (a[0] < b[0] ? -1 : 1));
  return most?.[0] ?? null;
}
