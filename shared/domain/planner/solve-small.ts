import { AllOrders, ordersOf } from './try-all';
import type { WorkingPlan } from './working-plan';

/** Orders that may be tried in all: some tens of milliseconds. */
const MOST_ORDERS = 400_000;
/** A set of jobs is a number with as many bits, and all its subsets are gone through. */
const MOST_JOBS = 9;

/**
 * Makes the plan under work the cheapest there is, where the problem is so small that everything can be
 * tried: each order on each shift, then each way to share the jobs out. Not where a stop at the shop
 * comes into it.
 *
 * @returns whether the plan is now known to be the cheapest
 */
export function solveSmall(plan: WorkingPlan): boolean {
  const { c } = plan;
  if (plan.movableCount > MOST_JOBS || (c.hasShop && c.partCount > 0)) return false;
  const jobs = Array.from({ length: c.jobCount }, (_, job) => job).filter(
    (job) => !c.isFrozen[job],
  );
  if (plan.routes.length * ordersOf(jobs.length) > MOST_ORDERS) return false;

  const before = plan.price;
  const shifts = plan.routes.map((route) => new AllOrders(c, route, jobs));
  plan.routes.forEach((_, r) => emptyOut(plan, r));
  let all: Sharing | null = null;
  for (const [technician, numbers] of shiftsByTechnician(plan)) {
    const own = numbers.map((r) => ofOneShift(r, shifts[r]!.price)).reduce(together);
    forbidLackingParts(plan, technician, jobs, own.price);
    all = all ? together(all, own) : own;
  }
  if (all) putOn(plan, shifts, all.shares(cheapestSet(plan, jobs, all.price)));
  if (plan.price < before - 1e-7 && plan.isSound) plan.keep();
  else plan.undo();
  return true;
}

/** How sets of jobs are shared out among some shifts at the least price. */
interface Sharing {
  readonly price: Float64Array;
  /** Shifts, each with its part of the set. */
  shares(set: number): readonly (readonly [shift: number, part: number])[];
}

const ofOneShift = (r: number, price: Float64Array): Sharing => ({
  price,
  shares: (set) => [[r, set]],
});

function together(one: Sharing, other: Sharing): Sharing {
  const price = new Float64Array(one.price.length).fill(Infinity);
  const part = new Int32Array(price.length);
  for (let set = 0; set < price.length; set++) {
    for (let taken = set; ; taken = (taken - 1) & set) {
      const sum = one.price[set ^ taken]! + other.price[taken]!;
      if (sum < price[set]!) {
        price[set] = sum;
        part[set] = taken;
      }
      if (taken === 0) break;
    }
  }
  const shares = (set: number) => [...one.shares(set ^ part[set]!), ...other.shares(part[set]!)];
  return { price, shares };
}

function shiftsByTechnician({ routes }: WorkingPlan): ReadonlyMap<number, number[]> {
  const numbers = new Map<number, number[]>();
  routes.forEach(({ from }, r) => {
    numbers.set(from.technician, [...(numbers.get(from.technician) ?? []), r]);
  });
  return numbers;
}

/** Rules out the sets for which the van lacks parts. */
function forbidLackingParts(
  { c, parts, routes }: WorkingPlan,
  technician: number,
  jobs: readonly number[],
  price: Float64Array,
): void {
  if (c.partCount === 0) return;
  const { from } = routes.find((route) => route.from.technician === technician)!;
  for (let set = 1; set < price.length; set++) {
    const taken: number[] = [];
    for (let k = 0; k < jobs.length; k++) {
      if (!(set & (1 << k))) continue;
      if (!parts.hasFor(technician, jobs[k]!)) {
        price[set] = Infinity;
        break;
      }
      parts.take(from, jobs[k]!);
      taken.push(jobs[k]!);
    }
    for (const job of taken) parts.giveBack(from, job);
  }
}

/** The set to serve, when leaving out the others has its price. */
function cheapestSet({ c }: WorkingPlan, jobs: readonly number[], price: Float64Array): number {
  let cheapest = 0;
  let least = Infinity;
  for (let set = 0; set < price.length; set++) {
    let sum = price[set]!;
    jobs.forEach((job, k) => {
      if (!(set & (1 << k))) sum += c.absentPrice[job]!;
    });
    if (sum < least) [least, cheapest] = [sum, set];
  }
  return cheapest;
}

function putOn(
  plan: WorkingPlan,
  shifts: readonly AllOrders[],
  shares: ReturnType<Sharing['shares']>,
): void {
  for (const [r, set] of shares) {
    for (const job of shifts[r]!.orderOf(set)) plan.putStop(r, plan.routes[r]!.count, job);
    plan.settle(r);
  }
}

function emptyOut(plan: WorkingPlan, r: number): void {
  plan.touch(r);
  const { frozenCount } = plan.routes[r]!;
  for (let i = plan.routes[r]!.count - 1; i >= frozenCount; i--) plan.cutStop(r, i);
  plan.settle(r);
}
