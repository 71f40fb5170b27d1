import type { Neighbours } from './neighbours';
import type { SeededRandom } from './random';
import type { WorkingPlan } from './working-plan';

/** Near jobs that are looked at. */
const NEAREST = 12;

/**
 * Lets two neighbouring routes swap what follows a job and what begins with a near one.
 *
 * @returns whether it was done; a plan that it leaves unsound is undone by the caller
 */
export function exchangeTails(
  plan: WorkingPlan,
  near: Neighbours,
  random: SeededRandom,
  job: number,
): boolean {
  const { c } = plan;
  if (near.count === 0) return false;
  const other = near.list[job * near.count + random.below(Math.min(NEAREST, near.count))]!;
  const a = plan.routeOf[job]!;
  const b = plan.routeOf[other]!;
  if (a < 0 || b < 0 || a === b || c.isFrozen[other]) return false;
  const tailA = tailFrom(plan, a, plan.gapOf[job]! + 1);
  const tailB = tailFrom(plan, b, plan.gapOf[other]!);
  if (!mayTake(plan, b, tailA) || !mayTake(plan, a, tailB)) return false;
  plan.touch(a);
  plan.touch(b);
  cutTail(plan, a, tailA.length);
  cutTail(plan, b, tailB.length);
  for (const moved of tailB) plan.putStop(a, plan.routes[a]!.count, moved);
  for (const moved of tailA) plan.putStop(b, plan.routes[b]!.count, moved);
  plan.settle(a);
  plan.settle(b);
  return true;
}

/** Jobs of a route from a gap on; accepted ones and the stop at the shop are no tail. */
function tailFrom(plan: WorkingPlan, r: number, gap: number): readonly number[] {
  const route = plan.routes[r]!;
  const tail: number[] = [];
  for (let i = Math.max(gap, route.frozenCount); i < route.count; i++) {
    if (i !== route.shopAt) tail.push(route.stops[i]!);
  }
  return tail;
}

function mayTake(plan: WorkingPlan, r: number, jobs: readonly number[]): boolean {
  const { row } = plan.routes[r]!;
  return jobs.every((job) => plan.c.mayServe[row + job]);
}

function cutTail(plan: WorkingPlan, r: number, length: number): void {
  const route = plan.routes[r]!;
  if (plan.c.hasShop) route.cutShop();
  for (let i = 0; i < length; i++) plan.cutStop(r, route.count - 1);
}
