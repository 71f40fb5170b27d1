import { chanceOf } from './chance';
import { direction, distance, type Point } from './plane';
import type { Terrain } from './terrain';

export type TownSize = 'city' | 'town' | 'village';

export interface Town {
  readonly index: number;
  readonly name: string;
  readonly size: TownSize;
  readonly at: Point;
  /** Metres from the middle to about where the streets end. */
  readonly radius: number;
  /** Unit vector along which the long streets run. */
  readonly along: Point;
  /** Metres between long streets, and between the streets that cross them. */
  readonly blockDepth: number;
  readonly blockLength: number;
  readonly postcodes: readonly string[];
  readonly isOnBarrier: boolean;
  /** Whether street names carry a direction from the town's middle. */
  readonly hasDirections: boolean;
}

/** Invented; none is a place known to us. The first is the city, the last three lie on the barrier strip. */
const NAMES = [
  'Ternhaven',
  'Larchmere Cove',
  'Gullwick',
  'Brinemouth',
  'Quartzby',
  'Alderskerry',
  'Plovermoor',
  'Marlhollow',
  'Sedgeholm',
  'Eiderby',
  'Cormstead',
  'Rowanscar',
];
const BARRIER_NAMES = ['Sandling Spit', 'Ospreyholm', 'Driftwold'];

/** Chooses places for the towns: far enough apart, on dry ground, some by the shore. */
export function placeTowns(seed: number, terrain: Terrain): Town[] {
  const chance = chanceOf(seed, 'towns');
  const towns: Town[] = [];
  const add = (
    name: string,
    size: TownSize,
    at: Point,
    radius: number,
    isOnBarrier: boolean,
  ): void => {
    const index = towns.length;
    const own = chanceOf(seed, 'town', index);
    towns.push({
      index,
      name,
      size,
      at,
      radius,
      // Barrier villages follow the strip, which runs nearly north; inland towns turn freely.
      along: isOnBarrier ? [0, 1] : direction(own.between(-0.41, 0.41), own.below(4)),
      blockDepth: isOnBarrier ? 92 : own.between(98, 122),
      blockLength: isOnBarrier ? 130 : own.between(170, 230),
      postcodes:
        size === 'city' ? ['00010', '00011', '00012'] : [String(20 + index * 2).padStart(5, '0')],
      isOnBarrier,
      hasDirections: size === 'city' || (size === 'town' && own.happens(0.4)),
    });
  };

  const fits = (at: Point, radius: number): boolean =>
    towns.every((town) => distance(at, town.at) > (town.radius + radius) * 1.55 + 900);

  const [cityName, ...townNames] = NAMES;
  for (let tries = 0; towns.length === 0 && tries < 5_000; tries++) {
    const at: Point = [chance.between(6_000, 12_000), chance.between(-4_500, 4_500)];
    const dry = terrain.clearance(at);
    // By the sound, and by no lake: what is near is the water to the east.
    const east = terrain.clearance([at[0] + dry + 60, at[1]]);
    if (dry > 1_150 && dry < 1_700 && east < 160) add(cityName!, 'city', at, 2_750, false);
  }
  for (const [k, name] of townNames.entries()) {
    const radius =
      k < 4
        ? chance.between(1_050, 1_350)
        : k < 8
          ? chance.between(750, 1_000)
          : chance.between(480, 640);
    const wantsShore = k % 2 === 0;
    for (let tries = 0; tries < 4_000; tries++) {
      const at: Point = [chance.between(-15_500, 11_000), chance.between(-18_500, 18_500)];
      const dry = terrain.clearance(at);
      if (wantsShore ? dry < radius * 0.45 || dry > radius * 0.9 : dry < radius * 1.15) continue;
      if (!fits(at, radius)) continue;
      add(name, k < 8 ? 'town' : 'village', at, radius, false);
      break;
    }
  }
  // One village south of the inlets and two between them; the northern strip stays empty.
  const [south, north] = terrain.inlets as [number, number];
  const northings = [south - 3_600, south + 3_100, north - 3_300];
  for (const [k, name] of BARRIER_NAMES.entries()) {
    add(name, 'village', terrain.barrierAt(northings[k]!), 640, true);
  }
  return towns;
}
