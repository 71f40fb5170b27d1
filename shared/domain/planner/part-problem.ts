import type { Plan, PlanJob, PlanProblem, PlanRoute, PlanTechnician } from './problem';
import { secondsOf } from './stop-drives';

/** A part of a problem that answers one question about a plan, small enough to be planned at once. */
export interface PartProblem {
  readonly problem: PlanProblem;
  /** The stops of the plan that it starts from. */
  readonly routes: readonly PlanRoute[];
}

/**
 * The routes of some technicians, with a call or two besides, as a problem of its own: it starts from the
 * plan, and a change of that plan costs nothing in it.
 *
 * @param more calls that are on no route of theirs
 */
export function partProblem(
  problem: PlanProblem,
  plan: Pick<Plan, 'routes'>,
  technicianIds: readonly string[],
  more: readonly PlanJob[] = [],
): PartProblem {
  const routes = plan.routes.filter(({ technician }) => technicianIds.includes(technician));
  const jobs = new Map(problem.jobs.map((job) => [job.id, job]));
  const places: number[] = [];
  const numbers = new Map<number, number>();
  const place = (loc: number): number => {
    const known = numbers.get(loc);
    if (known !== undefined) return known;
    numbers.set(loc, places.length);
    return places.push(loc) - 1;
  };
  const onRoutes = routes.flatMap(({ stops }) => stops.flatMap(({ job }) => jobs.get(job) ?? []));
  const partJobs = [...onRoutes, ...more].map((job) => ({ ...job, loc: place(job.loc) }));
  const technicians = problem.technicians
    .filter(({ id }) => technicianIds.includes(id))
    .map((one): PlanTechnician => ({
      ...one,
      home: place(one.home),
      at: place(one.at),
      shifts: one.shifts.map((shift) => ({
        ...shift,
        ...(shift.from === undefined ? {} : { from: place(shift.from) }),
        ...(shift.to === undefined ? {} : { to: place(shift.to) }),
      })),
    }));
  const shop = problem.shop && { ...problem.shop, loc: place(problem.shop.loc) };
  const size = places.length;
  const matrix = new Float64Array(size * size);
  for (let from = 0; from < size; from++)
    for (let to = 0; to < size; to++)
      matrix[from * size + to] = secondsOf(problem, places[from]!, places[to]!);
  return {
    routes,
    problem: {
      version: 1,
      now: problem.now,
      locations: size,
      matrix,
      jobs: partJobs,
      technicians,
      ...(shop ? { shop } : {}),
      previous: { routes },
      weights: { ...problem.weights, churnReassign: 0, churnMoved: 0 },
    },
  };
}

/** The same with one call changed. */
export const withJob = (
  problem: PlanProblem,
  id: string,
  change: Partial<PlanJob>,
): PlanProblem => ({
  ...problem,
  jobs: problem.jobs.map((job) => (job.id === id ? { ...job, ...change } : job)),
});
