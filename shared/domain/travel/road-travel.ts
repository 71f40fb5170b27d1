import type { LonLat } from './great-circle';
import type { TravelTimes } from './travel-times';
import { NO_WAY } from '../roads/road-graph';

/** A drive in milliseconds and decimetres, `NO_WAY` where none leads. */
export type Drive = (from: LonLat, to: LonLat) => { readonly ms: number; readonly dm: number };

const isSamePlace = (a: LonLat, b: LonLat): boolean => a[0] === b[0] && a[1] === b[1];

/**
 * Seconds from door to door for seconds behind the wheel: parking and the walk added, nothing where
 * nobody has to move. Rounded up to whole seconds, as straight lines are, so that a detour is still
 * never shorter than the direct way.
 *
 * @param seconds row-major; Infinity where no way leads, and so in the result
 */
export function doorToDoor(
  points: readonly LonLat[],
  seconds: ArrayLike<number>,
  stopSeconds: number,
): Float64Array {
  const size = points.length;
  const table = new Float64Array(size * size);
  for (let from = 0; from < size; from++) {
    for (let to = 0; to < size; to++) {
      const cell = from * size + to;
      if (!isSamePlace(points[from]!, points[to]!))
        table[cell] = Math.ceil(seconds[cell]!) + stopSeconds;
    }
  }
  return table;
}

/** Drives along roads for whoever asks for few of them. */
export function roadTravel(source: string, stopSeconds: number, drive: Drive): TravelTimes {
  return {
    source,
    distanceKm: (from, to) => {
      const { ms, dm } = drive(from, to);
      return ms >= NO_WAY ? Infinity : dm / 10_000;
    },
    matrix: (points) =>
      doorToDoor(
        points,
        points.flatMap((from) =>
          points.map((to) => {
            const { ms } = isSamePlace(from, to) ? { ms: 0 } : drive(from, to);
            return ms >= NO_WAY ? Infinity : ms / 1000;
          }),
        ),
        stopSeconds,
      ),
  };
}
