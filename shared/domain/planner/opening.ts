import type { Insertion } from './insertion';
import type { WorkingPlan } from './working-plan';

/** Takes over the stops of the plan in force in their order, leaving out what no longer fits. */
export function takeOverPrevious(plan: WorkingPlan): void {
  const { problem, shifts } = plan.c;
  if (!problem.previous) return;
  const jobNumber = new Map(problem.jobs.map((job, index) => [job.id, index]));
  const routeNumber = new Map(
    shifts.map(({ technician, shift }, index) => [
      `${shift} ${problem.technicians[technician]!.id}`,
      index,
    ]),
  );
  const taken = problem.previous.routes.flatMap(({ technician, shift, stops }) => {
    const route = routeNumber.get(`${shift} ${technician}`);
    if (route === undefined) return [];
    return [{ route, jobs: stops.flatMap((stop) => jobNumber.get(stop.job) ?? []) }];
  });
  // Earlier shifts first: they come first to what is on the van.
  taken.sort((a, b) => a.route - b.route);
  for (const { route, jobs } of taken) takeOver(plan, route, jobs);
}

function takeOver(plan: WorkingPlan, r: number, jobs: readonly number[]): void {
  const { c } = plan;
  const fitting = jobs.filter((job) => plan.bankIndex[job]! >= 0);
  if (putAll(plan, r, fitting)) return;
  for (const job of fitting) {
    const { row, from } = plan.routes[r]!;
    if (!c.mayServe[row + job] || !plan.parts.hasFor(from.technician, job)) continue;
    putAll(plan, r, [job]);
  }
}

/** Puts jobs at the end of a route; whether all of them fit, and none stays if they do not. */
function putAll(plan: WorkingPlan, r: number, jobs: readonly number[]): boolean {
  const { row } = plan.routes[r]!;
  if (jobs.some((job) => !plan.c.mayServe[row + job])) return false;
  plan.touch(r);
  if (plan.c.hasShop) plan.routes[r]!.cutShop();
  for (const job of new Set(jobs)) plan.putStop(r, plan.routes[r]!.count, job);
  plan.settle(r);
  const isSound = plan.isSound;
  if (isSound) plan.keep();
  else plan.undo();
  return isSound;
}

/** Puts jobs from the bank where they cost least, those with most at stake per minute first. */
export function fillFromBank(plan: WorkingPlan, insertion: Insertion, density: Float64Array): void {
  const waiting = Array.from(plan.bank.subarray(0, plan.bankCount));
  waiting.sort((a, b) => density[a]! - density[b]! || a - b);
  for (const job of waiting) {
    insertion.insert(job, null, false);
    if (plan.isSound) plan.keep();
    else plan.undo();
  }
}
