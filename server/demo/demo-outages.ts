import { featureCollection, polygon, simplify, union } from '@turf/turf';
import type { FeederDto, FeederMap } from '@shared/contract/feeders';
import type { LonLat } from '@shared/contract/common';
import { lastBack } from '@shared/domain/outage-area';
import { isInRing } from '@shared/domain/point-in-ring';
import { HOUR_MS, MINUTE_MS, type Instant } from '@shared/domain/instant';
import { signedArea } from '../region/rings';
import type { Chance } from './demo-calls';

/** An area that the demo's storm left without power. */
export interface DemoOutage {
  readonly name: string;
  readonly ring: LonLat[];
  readonly outAt: Instant;
  /** `null`: still out. */
  readonly backAt: Instant | null;
}

/** Shares of the feeders that fail, on the storm's side of the county and behind it. */
const FAILS_IN_THE_EAST = 0.62;
const FAILS_IN_THE_WEST = 0.2;
/** The substation that tripped as a whole is back in service after so many hours. */
const TRIPPED_FOR = 4.5;
/** An area's outline may have no more points than this. */
const MOST_POINTS = 480;

/**
 * What failed: feeders, more of them in the east where the storm came from, and one whole
 * substation, which was back soon, while some of the feeders inside stayed out for longer. Power
 * came back by the waves of the power company's plan; what the plan puts after `now` is still out.
 */
export function demoOutages(
  { feeders }: FeederMap,
  chance: Chance,
  wentOut: Instant,
  now: Instant,
): DemoOutage[] {
  const planned = feeders.filter(({ wave }) => wave !== null);
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
      ring: ringOf(feeder),
      outAt,
      backAt: backAt > now - HOUR_MS / 2 ? null : backAt,
    };
  });
  const tripped = mostHit(failed);
  const whole = tripped === null ? null : joined(planned.filter((f) => f.substation === tripped));
  if (tripped !== null && whole)
    outages.push({
      name: tripped,
      ring: whole,
      outAt: wentOut,
      backAt: wentOut + TRIPPED_FOR * HOUR_MS,
    });
  return outages.sort(
    (a, b) => (a.backAt ?? Infinity) - (b.backAt ?? Infinity) || a.outAt - b.outAt,
  );
}

/** The outage that counts at a place, as areas that overlap are read everywhere. */
export const outageAt = (outages: readonly DemoOutage[], at: LonLat): DemoOutage | null =>
  lastBack(outages.filter(({ ring }) => isInRing(at, ring)));

/** The outline of a feeder's largest part; its islands count for nothing here. */
function ringOf({ polygons }: FeederDto): LonLat[] {
  const outers = polygons.flatMap(([outer]) => (outer ? [outer] : []));
  return outers.reduce((largest, ring) =>
    Math.abs(signedArea(ring)) > Math.abs(signedArea(largest)) ? ring : largest,
  );
}

const eastingOf = (feeder: FeederDto): number => {
  const lons = ringOf(feeder).map(([lon]) => lon);
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

/** One outline around neighbouring feeders; the largest part when they do not all touch. */
function joined(feeders: readonly FeederDto[]): LonLat[] | null {
  if (feeders.length < 2) return null;
  const merged = union(featureCollection(feeders.map((feeder) => polygon([ringOf(feeder)]))));
  if (!merged) return null;
  const parts =
    merged.geometry.type === 'Polygon'
      ? [merged.geometry.coordinates]
      : merged.geometry.coordinates;
  const outers = parts.map(([outer]) => outer as LonLat[]);
  const outer = outers.reduce((largest, ring) =>
    Math.abs(signedArea(ring)) > Math.abs(signedArea(largest)) ? ring : largest,
  );
  if (outer.length <= MOST_POINTS) return outer;
  const thinner = simplify(polygon([outer]), { tolerance: 0.0005 });
  return (thinner.geometry.coordinates[0] ?? outer) as LonLat[];
}
