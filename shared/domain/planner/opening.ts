import { START } from './gap-fields';
import type { Insertion } from './insertion';
import type { MakingRoom } from './make-room';
import type { Neighbours } from './neighbours';
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

/** So many jobs are put beside near ones only: the search that follows makes up for it. */
const MANY_JOBS = 200;

/**
 * Puts jobs from the bank where they cost least, those with most at stake per minute first.
 *
 * @param near where a search follows: what is near to each job
 */
export function fillFromBank(
  plan: WorkingPlan,
  insertion: Insertion,
  density: Float64Array,
  near: Neighbours | null,
): void {
  const waiting = Array.from(plan.bank.subarray(0, plan.bankCount));
  waiting.sort((a, b) => density[a]! - density[b]! || a - b);
  const beside = waiting.length > MANY_JOBS ? near : null;
  for (const job of waiting) {
    if (beside) insertion.insertNear(job, beside, false);
    else insertion.insert(job, null, false);
    if (plan.isSound) plan.keep();
    else plan.undo();
  }
}

/** Jobs for which room is looked for before the search: a few milliseconds. */
const MOST_LOSERS = 40;

/**
 * Tries once, for the jobs that lose most where they are, whether another stop should go for them: a call
 * that has just come in stands at the end of the day or on no route, since routes are full.
 *
 * @param shouldStop asked before each; what has been done by then stays, since it was for the better
 */
export function makeRoomForLosers(
  plan: WorkingPlan,
  room: MakingRoom,
  shouldStop?: () => boolean,
): void {
  const losers = Array.from({ length: plan.c.jobCount }, (_, job) => ({
    job,
    loss: lossOf(plan, job),
  }))
    .filter(({ job, loss }) => loss > 0 && !plan.c.isFrozen[job])
    .sort((a, b) => b.loss - a.loss || a.job - b.job);
  for (const { job } of losers.slice(0, MOST_LOSERS)) {
    if (shouldStop?.()) return;
    const before = plan.price;
    if (!room.forJob(job)) continue;
    if (plan.isSound && plan.price < before) plan.keep();
    else plan.undo();
  }
}

/** Values that a job loses where it is. */
function lossOf({ c, routes, routeOf, gapOf }: WorkingPlan, job: number): number {
  const r = routeOf[job]!;
  const start = r < 0 ? Infinity : routes[r]!.at(gapOf[job]!, START);
  let loss = 0;
  for (let d = c.deadlineOffset[job]!; d < c.deadlineOffset[job + 1]!; d++) {
    const at = c.deadlineAt[d]!;
    if (start > at && at >= c.problem.now) loss += c.deadlineValue[d]!;
  }
  return loss;
}
