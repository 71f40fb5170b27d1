import type { Neighbours } from './neighbours';
import type { SeededRandom } from './random';
import type { WorkingPlan } from './working-plan';

// Taken once: looking a global up costs more than the sum where code runs in a sandbox.
const { floor, max, min } = Math;
const NEVER = Infinity;

/** Jobs taken out per round on average, and the longest string cut from one route: as published. */
const MEAN_REMOVED = 10;
const LONGEST_STRING = 10;
/** One round in so many takes out a whole route. */
const WHOLE_ROUTE_EVERY = 50;
const BANK_PER_ROUND = 8;

/** Takes stops out around a job, and calls jobs of the bank to take part. */
export class Ruin {
  /** Jobs that the round may put back. */
  readonly absent: number[] = [];
  private readonly isAbsent: Uint8Array;

  constructor(
    private readonly plan: WorkingPlan,
    private readonly near: Neighbours,
    private readonly random: SeededRandom,
    private readonly density: Float64Array,
  ) {
    this.isAbsent = new Uint8Array(plan.c.jobCount);
  }

  /** Cuts strings of stops out of the routes near a job. */
  around(seed: number): void {
    const { random, plan, near } = this;
    this.clear();
    const longest = max(1, min(LONGEST_STRING, this.meanStops()));
    const mostStrings = max(1, (4 * MEAN_REMOVED) / (1 + longest) - 1);
    const strings = floor(1 + random.unit() * mostStrings);
    const isWhole = random.below(WHOLE_ROUTE_EVERY) === 0;
    let cut = 0;
    for (let k = -1; k < near.count && cut < strings; k++) {
      const job = k < 0 ? seed : near.list[seed * near.count + k]!;
      const r = plan.routeOf[job]!;
      if (r < 0 || plan.isTouched[r] || plan.c.isFrozen[job]) continue;
      this.cutString(r, job, isWhole ? NEVER : longest);
      cut++;
      if (isWhole) break;
    }
    this.callFromBank(seed);
  }

  clear(): void {
    for (const job of this.absent) this.isAbsent[job] = 0;
    this.absent.length = 0;
  }

  private meanStops(): number {
    let used = 0;
    for (const route of this.plan.routes) if (route.count > route.frozenCount) used++;
    const { movableCount, bankCount } = this.plan;
    return used > 0 ? (movableCount - bankCount) / used : 0;
  }

  /** Cuts a string of stops around a job; half of the time some inner stops stay. */
  private cutString(r: number, job: number, longest: number): void {
    const { random, plan } = this;
    plan.touch(r);
    const route = plan.routes[r]!;
    if (plan.c.hasShop) route.cutShop();
    let at = route.frozenCount;
    while (route.stops[at] !== job) at++;
    const movable = route.count - route.frozenCount;
    const length = longest === NEVER ? movable : 1 + random.unit() * min(movable, longest);
    const cutLength = min(floor(length), movable);
    let stay = 0;
    if (cutLength > 1 && cutLength < movable && random.below(2) === 0) {
      stay = 1;
      while (cutLength + stay < movable && random.unit() > 0.5) stay++;
    }
    const span = cutLength + stay;
    const firstMin = max(route.frozenCount, at - span + 1);
    const firstMax = min(at, route.count - span);
    const first = firstMin + random.below(firstMax - firstMin + 1);
    const stayFrom = stay > 0 ? first + 1 + random.below(cutLength - 1) : first + span;
    for (let i = first + span - 1; i >= first; i--) {
      if (i >= stayFrom && i < stayFrom + stay) continue;
      this.callIn(route.stops[i]!);
      plan.cutStop(r, i);
    }
    plan.settle(r);
  }

  /** Lets some jobs of the bank take part: near ones, and those with most at stake per minute. */
  private callFromBank(seed: number): void {
    const { random, plan, near, density } = this;
    if (plan.bankIndex[seed]! >= 0) this.callIn(seed);
    let called = 0;
    for (let k = 0; k < near.count && called < BANK_PER_ROUND / 2; k++) {
      const job = near.list[seed * near.count + k]!;
      if (plan.bankIndex[job]! >= 0 && !this.isAbsent[job]) {
        this.callIn(job);
        called++;
      }
    }
    for (; called < BANK_PER_ROUND && plan.bankCount > 0; called++) {
      const one = plan.bank[random.below(plan.bankCount)]!;
      const other = plan.bank[random.below(plan.bankCount)]!;
      this.callIn(density[one]! < density[other]! ? one : other);
    }
  }

  private callIn(job: number): void {
    if (this.isAbsent[job]) return;
    this.isAbsent[job] = 1;
    this.absent.push(job);
  }
}
