import type { PlanJob, PlanProblem, PlanShift, PreviousPlan } from '@shared/domain/planner/problem';
import type { SeededRandom } from '@shared/domain/planner/random';

const HOUR = 3600;

/**
 * Adds to a made-up problem, each with a chance of its own: breaks, a shop with or without an end of
 * parts, service times by technician, calls that only some may serve, several windows, another place to
 * begin or end, an old plan whose promises count.
 *
 * @param shop place of the shop
 */
export function everythingElse(
  problem: PlanProblem,
  random: SeededRandom,
  shop: number,
): PlanProblem {
  const { now } = problem;
  const chance = (share: number): boolean => random.unit() < share;
  const between = (low: number, high: number): number =>
    Math.round(low + random.unit() * (high - low));
  const people = problem.technicians.map(({ id }) => id);
  const someone = (): string => people[random.below(people.length)]!;

  const withBreaks = (shift: PlanShift): PlanShift => {
    if (!chance(0.6)) return shift;
    const from = shift.start + between(HOUR, 3 * HOUR);
    const noon = { from, to: from + between(0.5 * HOUR, 2 * HOUR), seconds: between(600, 2700) };
    const later = noon.to + between(0, HOUR);
    const tea = { from: later, to: later + between(600, HOUR), seconds: between(300, 900) };
    return { ...shift, breaks: chance(0.3) ? [noon, tea] : [noon] };
  };
  const technicians = problem.technicians.map((technician) => ({
    ...technician,
    shifts: technician.shifts.map((shift) => ({
      ...withBreaks(shift),
      ...(chance(0.1) ? { from: random.below(problem.locations) } : {}),
      ...(chance(0.1) ? { to: random.below(problem.locations) } : {}),
    })),
  }));
  const jobs = problem.jobs.map((job): PlanJob => {
    const opens = now + between(0, 5 * HOUR);
    const windows = [
      [opens, opens + HOUR],
      [opens + 2 * HOUR, opens + 3 * HOUR],
    ] as const;
    return {
      ...job,
      ...(people.length > 0 && chance(0.15)
        ? { serviceBy: { [someone()]: Math.round(job.service * (0.6 + random.unit())) } }
        : {}),
      ...(people.length > 0 && chance(0.1)
        ? { onlyTechnicians: [...new Set([someone(), someone()])] }
        : {}),
      ...(chance(0.08) ? { windows } : {}),
      ...(chance(0.15) ? { part: chance(0.6) ? 'start-relay' : 'control-board' } : {}),
      ...(chance(0.08)
        ? { parts: ['start-relay', chance(0.5) ? 'start-relay' : 'control-board'] }
        : {}),
    };
  });
  const isShort = chance(0.4);
  return {
    ...problem,
    technicians,
    jobs,
    ...(chance(0.7)
      ? {
          shop: {
            loc: shop,
            seconds: between(300, 1200),
            ...(isShort ? { parts: { 'start-relay': 1, 'control-board': random.below(3) } } : {}),
          },
        }
      : {}),
    ...(people.length > 0 && chance(0.6) ? { previous: oldPlan() } : {}),
    ...(chance(0.5) ? { weights: { churnMoved: 12, movedBy: between(600, 2400) } } : {}),
  };

  /** Promises of an earlier hour: some to one who is gone, some out of date. */
  function oldPlan(): PreviousPlan {
    const routes = [...people, 'gone'].map((technician) => ({
      technician,
      shift: 0,
      stops: [] as { job: string; start: number }[],
    }));
    const accepted = new Set(technicians.flatMap(({ frozen }) => frozen));
    for (const { id } of jobs) {
      if (accepted.has(id) || !chance(0.6)) continue;
      const { stops } = routes[random.below(routes.length)]!;
      stops.push({ job: id, start: now + stops.length * HOUR + between(0, HOUR) });
    }
    return { routes };
  }
}
