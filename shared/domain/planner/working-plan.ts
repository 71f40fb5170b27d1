import type { CompiledProblem } from './compiled-problem';
import { PartsInUse } from './parts-in-use';
import { Route } from './route';

/**
 * The plan under work: routes, the jobs on none, parts, price; with a journal, so that whatever a round
 * of search has done can be undone, and the best plan seen.
 *
 * A change begins with `touch`, goes on with `put`, `cut` and `replace`, and ends with `settle`. A round
 * ends with `keep` or `undo`.
 */
export class WorkingPlan {
  readonly routes: Route[];
  /** Price of the plan under work. */
  price = 0;
  bestPrice = Infinity;
  readonly routeOf: Int32Array;
  /** Place of a job on its route. */
  readonly gapOf: Int32Array;
  /** Jobs on no route, in any order, and where each job stands in that list. */
  readonly bank: Int32Array;
  readonly bankIndex: Int32Array;
  bankCount = 0;
  /** Jobs that are not accepted stops. */
  readonly movableCount: number;
  readonly parts: PartsInUse;
  /** Routes that the round has changed. */
  readonly touched: number[] = [];
  readonly isTouched: Uint8Array;
  /** Of each route; the same number stands for the same order of stops. */
  readonly stampOf: Int32Array;
  /** Routes without any stop. */
  emptyCount = 0;

  /** The second route of each shift: as it was before the round, or free for the next. */
  private readonly spare: Route[];
  private readonly isEmpty: Uint8Array;
  private priceBefore = 0;
  private lastStamp = 0;
  private bestStops: Int32Array[];
  private readonly bestStamp: Int32Array;

  constructor(readonly c: CompiledProblem) {
    this.routes = c.shifts.map((shift) => new Route(c, shift));
    this.spare = c.shifts.map((shift) => new Route(c, shift));
    this.routeOf = new Int32Array(c.rowLength).fill(-1);
    this.gapOf = new Int32Array(c.rowLength);
    this.bank = new Int32Array(c.jobCount);
    this.bankIndex = new Int32Array(c.jobCount).fill(-1);
    this.parts = new PartsInUse(c);
    this.isTouched = new Uint8Array(this.routes.length);
    this.isEmpty = new Uint8Array(this.routes.length);
    this.stampOf = new Int32Array(this.routes.length);
    this.bestStops = this.routes.map(() => new Int32Array(0));
    this.bestStamp = new Int32Array(this.routes.length).fill(-1);
    for (let job = 0; job < c.jobCount; job++) if (!c.isFrozen[job]) this.addToBank(job);
    this.movableCount = this.bankCount;
    this.routes.forEach((_, r) => this.noteStops(r));
    this.sumPrice();
    this.priceBefore = this.price;
    this.keepIfBest();
  }

  /** Opens a route for change. */
  touch(r: number): void {
    if (this.isTouched[r]) return;
    if (this.touched.length === 0) this.priceBefore = this.price;
    this.isTouched[r] = 1;
    this.touched.push(r);
    const old = this.routes[r]!;
    const fresh = this.spare[r]!;
    fresh.replace(old.stops, old.count);
    fresh.price = old.price;
    fresh.shopAt = old.shopAt;
    this.routes[r] = fresh;
    this.spare[r] = old;
  }

  /** Takes a stop off a touched route and into the bank. */
  cutStop(r: number, gap: number): void {
    const route = this.routes[r]!;
    const job = route.stops[gap]!;
    route.cut(gap, 1);
    if (job >= this.c.jobCount) return;
    this.parts.giveBack(route.from, job);
    this.addToBank(job);
  }

  /** Puts a job of the bank onto a touched route. */
  putStop(r: number, gap: number, job: number): void {
    const route = this.routes[r]!;
    route.put(gap, job);
    this.parts.take(route.from, job);
    this.removeFromBank(job);
  }

  /** Works out a touched route anew, and the later shifts of its technician where parts run short. */
  settle(r: number): void {
    this.settleOne(r);
    if (!this.c.hasShop) return;
    const { technician, shift } = this.routes[r]!.from;
    for (let later = r + 1; later < this.routes.length; later++) {
      const { from } = this.routes[later]!;
      if (from.technician !== technician) break;
      if (from.shift > shift && this.parts.usesAny(from)) {
        this.touch(later);
        this.settleOne(later);
      }
    }
  }

  private settleOne(r: number): void {
    const route = this.routes[r]!;
    const before = route.price;
    if (this.c.hasShop) this.parts.arrangeShop(route);
    else route.refresh();
    route.stamp = this.stampOf[r] = ++this.lastStamp;
    this.price += route.price - before;
    this.noteStops(r);
  }

  /** Whether every touched route is within its limit and all parts are there. */
  get isSound(): boolean {
    for (const r of this.touched) {
      if (!this.routes[r]!.isWithinLimit || !this.parts.areThere(this.routes[r]!)) return false;
    }
    return true;
  }

  keep(): void {
    for (const r of this.touched) this.isTouched[r] = 0;
    this.touched.length = 0;
    if (this.price < this.bestPrice - 1e-7) this.keepIfBest();
  }

  /** Puts everything back as it was when the round's first route was touched. */
  undo(): void {
    if (this.touched.length === 0) return;
    const { jobCount } = this.c;
    for (const r of this.touched) {
      const route = this.routes[r]!;
      for (let i = route.frozenCount; i < route.count; i++) {
        const job = route.stops[i]!;
        if (job >= jobCount) continue;
        this.parts.giveBack(route.from, job);
        this.addToBank(job);
      }
    }
    for (const r of this.touched) {
      const route = this.spare[r]!;
      this.spare[r] = this.routes[r]!;
      this.routes[r] = route;
      this.stampOf[r] = route.stamp;
      this.isTouched[r] = 0;
      for (let i = route.frozenCount; i < route.count; i++) {
        const job = route.stops[i]!;
        if (job >= jobCount) continue;
        this.parts.take(route.from, job);
        this.removeFromBank(job);
      }
      this.noteStops(r);
    }
    this.touched.length = 0;
    this.price = this.priceBefore;
  }

  /** Makes the best plan found the plan under work. */
  restoreBest(): void {
    this.routes.forEach((route, r) => {
      if (route.stamp === this.bestStamp[r]) return;
      this.touch(r);
      for (let i = this.routes[r]!.count - 1; i >= route.frozenCount; i--) this.cutStop(r, i);
    });
    for (const r of this.touched) {
      for (const job of this.bestStops[r]!.subarray(this.routes[r]!.frozenCount)) {
        if (job < this.c.jobCount) this.putStop(r, this.routes[r]!.count, job);
      }
    }
    for (const r of [...this.touched]) this.settle(r);
    this.sumPrice();
    this.keep();
  }

  /** Adds up the price anew, so that the errors of many small sums do not gather. */
  sumPrice(): void {
    let price = 0;
    for (const route of this.routes) price += route.price;
    for (let i = 0; i < this.bankCount; i++) price += this.c.absentPrice[this.bank[i]!]!;
    this.price = price;
  }

  private keepIfBest(): void {
    this.sumPrice();
    if (this.price >= this.bestPrice) return;
    this.bestPrice = this.price;
    this.routes.forEach((route, r) => {
      if (route.stamp === this.bestStamp[r]) return;
      this.bestStops[r] = route.stops.slice(0, route.count);
      this.bestStamp[r] = route.stamp;
    });
  }

  private addToBank(job: number): void {
    this.price += this.c.absentPrice[job]!;
    this.routeOf[job] = -1;
    this.bankIndex[job] = this.bankCount;
    this.bank[this.bankCount++] = job;
  }

  private removeFromBank(job: number): void {
    this.price -= this.c.absentPrice[job]!;
    const index = this.bankIndex[job]!;
    const last = this.bank[--this.bankCount]!;
    this.bank[index] = last;
    this.bankIndex[last] = index;
    this.bankIndex[job] = -1;
  }

  private noteStops(r: number): void {
    const { routeOf, gapOf } = this;
    const { stops, count } = this.routes[r]!;
    const isEmpty = count === 0 ? 1 : 0;
    this.emptyCount += isEmpty - this.isEmpty[r]!;
    this.isEmpty[r] = isEmpty;
    for (let i = 0; i < count; i++) {
      routeOf[stops[i]!] = r;
      gapOf[stops[i]!] = i;
    }
  }
}
