import type { PlanProblem } from '@shared/domain/planner/problem';
import { SeededRandom } from '@shared/domain/planner/random';

/** How customers lie: anywhere, in clumps, or half and half. */
export type Geometry = 'random' | 'clustered' | 'mixed';

export interface RoutingOptions {
  readonly customers: number;
  readonly geometry: Geometry;
  /** A long day lets one vehicle serve some thirty customers, a short one about ten. */
  readonly isLongDay: boolean;
  readonly seed: number;
}

const SERVICE = 100;
/** Length of a day in the unit of distances: a tenth of a step on the map. */
const SHORT_DAY = 2600;
const LONG_DAY = 9000;

/**
 * A made-up routing problem with time windows as good as hard, where nothing but the way counts: the
 * kind of the published benchmarks, in sizes that those in the test data do not have.
 */
export function madeRouting({ customers, geometry, isLongDay, seed }: RoutingOptions): PlanProblem {
  const random = new SeededRandom(seed);
  const between = (low: number, high: number): number => low + random.unit() * (high - low);
  const size = 1000 * Math.sqrt(customers / 100);
  const clumps = Array.from({ length: Math.ceil(customers / 12) }, () => [
    between(0, size),
    between(0, size),
  ]);
  const anywhere = (): number[] => [between(0, size), between(0, size)];
  const inClump = (index: number): number[] =>
    clumps[index % clumps.length]!.map((middle) => middle + between(-60, 60));
  const places = [
    [size / 2, size / 2],
    ...Array.from({ length: customers }, (_, index) => {
      const isIn = geometry === 'clustered' || (geometry === 'mixed' && index % 2 === 0);
      return isIn ? inClump(index) : anywhere();
    }),
  ];
  const distance = (from: number, to: number): number =>
    Math.hypot(places[from]![0]! - places[to]![0]!, places[from]![1]! - places[to]![1]!);
  const day = (isLongDay ? LONG_DAY : SHORT_DAY) + size;
  const width = isLongDay ? 1200 : 400;
  return {
    version: 1,
    now: 0,
    locations: places.length,
    matrix: places.flatMap((_, from) => places.map((__, to) => distance(from, to))),
    weights: {
      travelPerHour: 3600,
      waitPerHour: 0,
      lateFixed: 1e5,
      latePerHour: 3.6e6,
      maxOvertime: 0,
      unservedBase: 1e6,
    },
    technicians: Array.from({ length: Math.ceil(customers / 4) }, (_, index) => ({
      id: `v${index}`,
      home: 0,
      at: 0,
      availableAt: 0,
      skills: [],
      parts: {},
      frozen: [],
      shifts: [{ start: 0, end: day }],
    })),
    jobs: Array.from({ length: customers }, (_, index) => {
      const loc = index + 1;
      const soonest = distance(0, loc);
      const middle = between(soonest, day - soonest - SERVICE);
      // One in four may be visited at any time of the day.
      const window: readonly [number, number] =
        random.below(4) === 0
          ? [0, day - soonest - SERVICE]
          : [
              Math.max(0, middle - width),
              Math.min(day - soonest - SERVICE, Math.max(soonest, middle + width)),
            ];
      return {
        id: String(loc),
        loc,
        service: SERVICE,
        calledAt: 0,
        weight: 1,
        skills: [],
        windows: [window],
      };
    }),
  };
}
