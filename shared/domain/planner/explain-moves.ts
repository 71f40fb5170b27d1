import { partProblem, withJob } from './part-problem';
import { carriedOver, plan } from './plan';
import { movesBetween } from './plan-summary';
import type { Plan, PlanProblem, PreviousPlan } from './problem';

/** What one change of a plan is worth: the price of the plan with this change undone, less its own. */
export interface MoveGain {
  readonly job: string;
  readonly kind: 'added' | 'to-other-technician';
  /** Money, before what a change of a promise costs; near 0 where it only makes room for others. */
  readonly gain: number;
}

/**
 * What each new call on a route and each change of technician gains, found by undoing it: the call is
 * taken off its new route and left out, or put back to its technician of before at the best place there,
 * and everything else stays in its order.
 *
 * @param shouldStop asked before each; what is not looked at by then is left out
 */
export function moveGains(
  problem: PlanProblem,
  made: Pick<Plan, 'routes'>,
  shouldStop: () => boolean = () => false,
): MoveGain[] {
  const before = technicianOf(problem.previous?.routes ?? []);
  const now = technicianOf(made.routes);
  const moves = movesBetween(problem.previous, made);
  const gains: MoveGain[] = [];
  for (const [kind, jobs] of [
    ['to-other-technician', moves.toOtherTechnician],
    ['added', moves.added],
  ] as const)
    for (const job of jobs) {
      if (shouldStop()) return gains;
      const to = now.get(job);
      const from = kind === 'added' ? undefined : before.get(job);
      if (to === undefined) continue;
      gains.push({ job, kind, gain: gainOf(problem, made, job, to, from) });
    }
  return gains;
}

/** @param from `undefined`: the call was on no route */
function gainOf(
  problem: PlanProblem,
  made: Pick<Plan, 'routes'>,
  job: string,
  to: string,
  from: string | undefined,
): number {
  const part = partProblem(problem, made, from === undefined ? [to] : [to, from]);
  const undone = withJob(part.problem, job, {
    onlyTechnicians: from === undefined ? [] : [from],
  });
  return plan(undone, { iterations: 0, seed: 1 }).cost - carriedOver(part.problem).cost;
}

const technicianOf = (routes: PreviousPlan['routes']): ReadonlyMap<string, string> =>
  new Map(routes.flatMap(({ technician, stops }) => stops.map(({ job }) => [job, technician])));
