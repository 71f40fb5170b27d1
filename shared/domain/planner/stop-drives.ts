import type { PlanProblem, PlanRoute } from './problem';

/** Seconds of driving to each stop of a plan, by job: by the shop, where the route goes there first. */
export function stopDrives(
  problem: PlanProblem,
  plan: { readonly routes: readonly PlanRoute[] },
): Map<string, number> {
  const locOf = new Map(problem.jobs.map(({ id, loc }) => [id, loc]));
  const technicians = new Map(problem.technicians.map((one) => [one.id, one]));
  const drives = new Map<string, number>();
  for (const { technician, shift, stops, halts } of plan.routes) {
    const person = technicians.get(technician);
    if (!person) continue;
    let here = person.shifts[shift]?.from ?? (shift === 0 ? person.at : person.home);
    stops.forEach(({ job }, index) => {
      const there = locOf.get(job) ?? here;
      const isByShop = halts?.some(({ kind, before }) => kind === 'shop' && before === index);
      drives.set(
        job,
        isByShop && problem.shop
          ? secondsOf(problem, here, problem.shop.loc) + secondsOf(problem, problem.shop.loc, there)
          : secondsOf(problem, here, there),
      );
      here = there;
    });
  }
  return drives;
}

/** Seconds from one place of the matrix to another. */
export function secondsOf(
  { matrix, locations }: Pick<PlanProblem, 'matrix' | 'locations'>,
  from: number,
  to: number,
): number {
  const row = matrix[from];
  return typeof row === 'object' ? row[to]! : (matrix as ArrayLike<number>)[from * locations + to]!;
}
