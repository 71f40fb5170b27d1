import { chanceOf } from './chance';
import type { Point } from './plane';
import type { Town } from './towns';

/** A park in a town's own coordinates: it takes the place of a few blocks. */
export interface Park {
  readonly from: number;
  readonly to: number;
  /** The long streets that bound it. */
  readonly low: number;
  readonly high: number;
}

export function chooseParks(town: Town, number: number, seed: number): Park[] {
  const chance = chanceOf(seed, 'parks', town.index * 1_000 + number);
  const count = town.isOnBarrier ? 0 : town.size === 'city' ? 4 : town.size === 'town' ? 2 : 1;
  const parks: Park[] = [];
  for (let tries = 0; tries < 60 && parks.length < count; tries++) {
    const length = Math.round(chance.between(0.8, 1.5) * town.blockLength);
    const from = Math.round(chance.between(-0.55, 0.55) * town.radius);
    const low = Math.round((chance.between(-0.55, 0.55) * town.radius) / town.blockDepth);
    const park: Park = { from, to: from + length, low, high: low + 2 };
    // The main streets through the middle stay whole.
    if (park.from < 70 && park.to > -70) continue;
    if (park.low < 0 && park.high > 0) continue;
    if (
      parks.some(
        (other) =>
          other.from - 250 < park.to &&
          park.from - 250 < other.to &&
          other.low - 2 < park.high &&
          park.low - 2 < other.high,
      )
    )
      continue;
    parks.push(park);
  }
  return parks;
}

export const parkRing = (
  park: Park,
  town: Town,
  place: (u: number, v: number) => Point,
): Point[] => {
  const inset = 14;
  const low = park.low * town.blockDepth + inset;
  const high = park.high * town.blockDepth - inset;
  const from = park.from + inset;
  const to = park.to - inset;
  const ring: Point[] = [];
  const side = (u0: number, v0: number, u1: number, v1: number): void => {
    for (let i = 0; i < 6; i++)
      ring.push(place(u0 + ((u1 - u0) * i) / 6, v0 + ((v1 - v0) * i) / 6));
  };
  side(from, low, to, low);
  side(to, low, to, high);
  side(to, high, from, high);
  side(from, high, from, low);
  return [...ring, ring[0]!];
};
