import { chanceOf, type Chance } from './chance';
import { distance, type Point } from './plane';
import type { NamedPlace } from './places';
import { cellAt, type Territory } from './territory';
import type { Terrain } from './terrain';
import type { Town } from './towns';

/** Which wave of repairs a feeder belongs to, and when its power is back, in hours after the storm. */
export interface Restoration {
  readonly wave: number;
  readonly hours: number;
}

/** Hours to repair a feeder of each wave, at the middle: invented, in the order in which power companies repair. */
const MEDIAN_HOURS = [3, 6, 11, 18, 30] as const;
/** Spread of the logarithm of the hours. */
const SPREAD = 0.32;
/** Crews drive from the city: metres per hour, on roads that are half cleared (common practice, no source). */
const CREW_SPEED = 30_000;
const STRIP_REACH = 1_000;

/**
 * The power company's plan. The hospital's feeder comes first, then those with a clinic, a fire
 * house or the police, then those with many houses, then the others, and the barrier strip, which
 * crews reach last, at the end.
 */
export function restorations(
  seed: number,
  terrain: Terrain,
  towns: readonly Town[],
  places: readonly NamedPlace[],
  hearts: readonly Point[],
  customers: readonly number[],
  territory: Territory,
): Restoration[] {
  const chance = chanceOf(seed, 'restoration');
  const vital = feedersWith(places, territory, ['hospital']);
  const needed = feedersWith(places, territory, ['clinic', 'fire_station', 'police']);
  const sorted = [...customers].sort((a, b) => a - b);
  const many = sorted[Math.floor(sorted.length * 0.55)]!;
  return hearts.map((heart, feeder): Restoration => {
    const isOnStrip = Math.abs(heart[0] - terrain.barrierAt(heart[1])[0]) < STRIP_REACH;
    const wave = isOnStrip
      ? 5
      : vital.has(feeder)
        ? 1
        : needed.has(feeder)
          ? 2
          : customers[feeder]! >= many
            ? 3
            : 4;
    const travel = (1.3 * distance(heart, towns[0]!.at)) / CREW_SPEED;
    const hours = MEDIAN_HOURS[wave - 1]! * skewed(chance) + travel;
    return { wave, hours: Math.round(hours * 10) / 10 };
  });
}

/** A factor about 1 that is close to lognormal: the product of twelve even chances needs no exponential. */
function skewed(chance: Chance): number {
  let factor = 1;
  for (let i = 0; i < 12; i++) factor *= 1 + SPREAD * chance.between(-0.5, 0.5);
  return factor;
}

function feedersWith(
  places: readonly NamedPlace[],
  territory: Territory,
  amenities: readonly string[],
): Set<number> {
  return new Set(
    places.flatMap(({ at, tags }) =>
      amenities.includes(tags['amenity'] ?? '') ? [territory[cellAt(at)]!] : [],
    ),
  );
}

/** Addresses in each feeder's cells. */
export function customersOf(
  addresses: readonly { readonly at: Point }[],
  territory: Territory,
  count: number,
): number[] {
  const customers = new Array<number>(count).fill(0);
  for (const { at } of addresses) {
    const feeder = territory[cellAt(at)]!;
    if (feeder >= 0) customers[feeder]!++;
  }
  return customers;
}
