import { chanceOf } from './chance';
import { between, distance, isInside, type Point } from './plane';
import { type StreetSpace, type StreetLine, type StreetPart } from './street-line';
import type { Terrain } from './terrain';
import type { Town } from './towns';

// Taken out once: inside a test's sandbox every look-up of a global is slow.
const { floor } = Math;

export interface HouseAddress {
  readonly at: Point;
  readonly number: number;
  readonly street: string;
  readonly streetName: string;
  readonly town: number;
  readonly postcode: string;
  /** Number of flats behind one door; 1 for a house. */
  readonly flats: number;
}

/** Metres between houses on one side, and the share of lots that stay empty. */
const SPACING: Readonly<Record<StreetPart, { readonly metres: number; readonly empty: number }>> = {
  along: { metres: 32, empty: 0.36 },
  across: { metres: 34, empty: 0.45 },
  waterfront: { metres: 34, empty: 0.3 },
  loop: { metres: 32, empty: 0.25 },
  cul: { metres: 32, empty: 0.25 },
  highway: { metres: 400, empty: 0.5 },
  road: { metres: 190, empty: 0.2 },
  rural: { metres: 170, empty: 0.16 },
  lane: { metres: 130, empty: 0.16 },
};
const DOORS_APART = 13;

/** The town whose name the post gives to a place: the nearest, measured from its edge. */
export function postTown(towns: readonly Town[], p: Point): Town {
  let best = towns[0]!;
  let least = Infinity;
  for (const town of towns) {
    const off = distance(p, town.at) - town.radius;
    if (off < least) {
      least = off;
      best = town;
    }
  }
  return best;
}

function postcodeOf(town: Town, [x, y]: Point): string {
  if (town.postcodes.length === 1) return town.postcodes[0]!;
  return town.postcodes[y > town.at[1] + 700 ? 0 : x > town.at[0] ? 1 : 2]!;
}

/** Walks every street and sets houses on both sides: odd on the left, even on the right. */
export function houseAddresses(
  seed: number,
  towns: readonly Town[],
  lines: readonly StreetLine[],
  nameOf: (street: string) => string,
  terrain: Terrain,
  built: StreetSpace,
  parks: readonly Point[][],
): HouseAddress[] {
  const addresses: HouseAddress[] = [];
  const doors = new DoorSpace();
  const taken = new Set<string>();
  lines.forEach((line, index) => {
    const { numbers, points } = line;
    if (!numbers || line.isBridge) return;
    const chance = chanceOf(seed, 'houses', index);
    const { metres, empty } = SPACING[line.part];
    const isTown = line.town !== null;
    for (const side of [1, -1]) {
      let due = metres * chance.between(0.4, 0.9);
      for (let i = 1; i < points.length; i++) {
        const a = points[i - 1]!;
        const b = points[i]!;
        const span = distance(a, b);
        if (span === 0) continue;
        for (; due <= span; due += metres * chance.between(0.85, 1.15)) {
          const isEmpty = chance.happens(empty);
          const setback = isTown ? chance.between(17, 24) : chance.between(22, 42);
          const flats = chance.happens(
            isTown && line.part !== 'loop' && line.part !== 'cul' ? 0.035 : 0,
          )
            ? 4 + 2 * chance.below(11)
            : 1;
          if (isEmpty) continue;
          const share = due / span;
          const foot = between(a, b, share);
          const at: Point = [
            foot[0] - ((b[1] - a[1]) / span) * setback * side,
            foot[1] + ((b[0] - a[0]) / span) * setback * side,
          ];
          if (terrain.clearance(at) < 58 || parks.some((ring) => isInside(at, ring))) continue;
          // Nearer to a street than to stand beside it, or the own street is not built here.
          if (built.nearest(at, 14) !== null) continue;
          if (built.nearest(at, 55, (street) => street === line.street) === null) continue;
          const measure = numbers[i - 1]! + (numbers[i]! - numbers[i - 1]!) * share;
          const number = 2 * floor(measure / 2) + (side > 0 ? 1 : 2);
          const town = isTown ? towns[line.town]! : postTown(towns, at);
          const streetName = nameOf(line.street);
          const key = `${number} ${streetName} ${town.index}`;
          if (number < 1 || taken.has(key) || !doors.take(at)) continue;
          taken.add(key);
          addresses.push({
            at,
            number,
            street: line.street,
            streetName,
            town: town.index,
            postcode: postcodeOf(town, at),
            flats,
          });
        }
        due -= span;
      }
    }
  });
  return addresses;
}

/** Keeps doors apart. */
class DoorSpace {
  private readonly buckets = new Map<number, Point[]>();

  /** Whether a door may stand here; if so, it does from now on. */
  take(p: Point): boolean {
    const i = floor(p[0] / DOORS_APART);
    const j = floor(p[1] / DOORS_APART);
    for (let dj = -1; dj <= 1; dj++) {
      for (let di = -1; di <= 1; di++) {
        if (this.buckets.get(key(i + di, j + dj))?.some((door) => distance(door, p) < DOORS_APART))
          return false;
      }
    }
    const bucket = this.buckets.get(key(i, j));
    if (bucket) bucket.push(p);
    else this.buckets.set(key(i, j), [p]);
    return true;
  }
}

const key = (i: number, j: number): number => (i + 16_384) * 65_536 + (j + 16_384);
