import { distance, type Point } from './plane';
import type { Terrain } from './terrain';
import { HALF_WIDTH } from './terrain';

/** Where the car ferry over the estuary lands on either bank. */
export interface FerryCrossing {
  readonly west: Point;
  readonly east: Point;
}

/** How far up from its mouth the estuary is crossed, as a northing in metres. */
const NORTHING = -14_600;
/** Metres from the water at which the road ends and cars wait. */
const LANDING_CLEARANCE = 105;
const STEP = 10;

/** The crossing at the first dry ground west and east of the estuary's middle; null where it has silted up. */
export function ferryCrossing(terrain: Terrain): FerryCrossing | null {
  const mouth = terrain.river[0]!;
  const middle = widest(terrain, mouth[0]);
  if (middle === null) return null;
  const land = (step: number): Point | null => {
    for (let x = middle; Math.abs(x) < HALF_WIDTH; x += step)
      if (terrain.clearance([x, NORTHING]) > LANDING_CLEARANCE) return [x, NORTHING];
    return null;
  };
  const [west, east] = [land(-STEP), land(STEP)];
  return west && east && distance(west, east) < 3_000 ? { west, east } : null;
}

/** The middle of the stretch of water nearest to where the river comes from. */
function widest(terrain: Terrain, near: number): number | null {
  for (let off = 0; off < 4_000; off += STEP) {
    for (const x of [near - off, near + off])
      if (terrain.clearance([x, NORTHING]) === 0 && terrain.clearance([x - 60, NORTHING]) === 0)
        return x;
  }
  return null;
}
