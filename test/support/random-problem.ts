import type { PlanJob, PlanProblem, PlanTechnician } from '@shared/domain/planner/problem';
import { everythingElse } from './random-extras';
import { SeededRandom } from '@shared/domain/planner/random';
import type { LonLat } from '@shared/domain/travel/great-circle';
import { travelMatrix } from '@shared/domain/travel/travel-times';

export interface RandomProblemOptions {
  readonly seed: number;
  readonly jobs: number;
  readonly technicians: number;
  /** Shifts per technician, a day apart. */
  readonly shifts?: number;
  /** Chance that a technician begins with an accepted stop. */
  readonly frozenShare?: number;
  /** Half-width of the county in degrees. */
  readonly spread?: number;
  /** With breaks, a shop, times of their own, limits to some technicians, promises that count. */
  readonly everything?: boolean;
}

const HOUR = 3600;
const NOW = 1_790_000_000;

/** A made-up morning after a storm: calls in clumps, mixed values, skills, parts and appointments. */
export function randomProblem(options: RandomProblemOptions): PlanProblem {
  const random = new SeededRandom(options.seed);
  const between = (low: number, high: number): number => low + random.unit() * (high - low);
  const chance = (share: number): boolean => random.unit() < share;
  const spread = options.spread ?? 0.2;
  const clumps = Array.from({ length: 1 + Math.ceil(options.jobs / 25) }, () => [
    between(-spread, spread),
    between(-spread, spread),
  ]);
  const place = (): LonLat => {
    const [lon, lat] = clumps[random.below(clumps.length)]!;
    const reach = chance(0.7) ? spread / 10 : spread / 2;
    return [-38 + lon! + between(-reach, reach), 31 + lat! + between(-reach, reach)];
  };
  const points: LonLat[] = [];
  const add = (point: LonLat): number => points.push(point) - 1;

  const technicians = Array.from({ length: options.technicians }, (_, index): PlanTechnician => {
    const home = add(place());
    return {
      id: `tech-${index}`,
      home,
      at: chance(0.5) ? home : add(place()),
      availableAt: NOW + Math.round(between(0, HOUR)),
      skills: ['electrical', 'sealed-system', 'commercial'].filter(() => chance(0.6)),
      parts: { 'start-relay': random.below(4), 'control-board': random.below(2) },
      shifts: Array.from({ length: options.shifts ?? 1 }, (_, shift) => {
        const start = NOW + shift * 24 * HOUR;
        return { start, end: start + Math.round(between(4, 10)) * HOUR };
      }),
      frozen: [],
    };
  });
  const jobs = Array.from({ length: options.jobs }, (_, index): PlanJob => {
    const calledAt = NOW - Math.round(between(0, 10 * HOUR));
    const opens = NOW + Math.round(between(0, 6 * HOUR));
    const hasFood = chance(0.8);
    return {
      id: `call-${index}`,
      loc: add(place()),
      service: Math.round(between(15, 90) * 60),
      calledAt,
      weight: chance(0.06) ? 5 : hasFood ? 2 : 1,
      skills: chance(0.18) ? ['sealed-system'] : chance(0.2) ? ['electrical'] : [],
      ...(chance(0.18) ? { part: chance(0.7) ? 'start-relay' : 'control-board' } : {}),
      ...(chance(0.1) ? { windows: [[opens, opens + 2 * HOUR] as const] } : {}),
      ...(chance(0.05) ? { earliest: NOW + Math.round(between(0, 3 * HOUR)) } : {}),
      ...(hasFood
        ? {
            deadlines: [
              { at: calledAt + 4 * HOUR, value: Math.round(between(50, 300)) },
              {
                at: calledAt + (chance(0.5) ? 24 : 12) * HOUR,
                value: Math.round(between(100, 600)),
              },
            ].slice(random.below(2)),
          }
        : {}),
    };
  });
  const free = jobs.map((job) => job.id);
  const withFrozen = technicians.map((technician) => {
    if (free.length === 0 || !chance(options.frozenShare ?? 0)) return technician;
    return { ...technician, frozen: free.splice(random.below(free.length), 1) };
  });
  const shop = options.everything ? add(place()) : -1;
  const problem: PlanProblem = {
    version: 1,
    now: NOW,
    locations: points.length,
    matrix: travelMatrix(points),
    jobs,
    technicians: withFrozen,
  };
  return options.everything ? everythingElse(problem, random, shop) : problem;
}
