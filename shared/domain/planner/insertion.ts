import { AlikeShifts } from './alike-shifts';
import type { CompiledProblem } from './compiled-problem';
import { GapScan } from './gap-scan';
import type { Neighbours } from './neighbours';
import type { SeededRandom } from './random';
import type { Route } from './route';
import { ShopDetour } from './shop-detour';
import type { WorkingPlan } from './working-plan';

// Taken once: looking a global up costs more than the sum where code runs in a sandbox.
const { floor, log } = Math;

/** The best place on a route is passed over with this chance, so that a hole is not refilled the same way. */
const BLINK_CHANCE = 0.01;
const LOG_NO_BLINK = log(1 - BLINK_CHANCE);
/** Nearest jobs whose routes are looked at before all others. */
const FIRST_LOOK = 3;

/**
 * Finds where a job of the bank costs least.
 *
 * A job's best place on a route is remembered until that route changes: a round changes few of them,
 * so most looks at a route are one comparison.
 */
export class Insertion {
  /** The best place found, or -1 where leaving the job out costs less than any. */
  route = -1;
  /** Its gap, the stop at the shop not counted. */
  gap = -1;
  /** Price of the job there. */
  price = Infinity;

  private readonly c: CompiledProblem;
  private readonly scan: GapScan;
  private readonly detour: ShopDetour;
  /** Looks at a route until the next one whose best place is passed over. */
  private blinkIn = 1;
  private readonly routeCount: number;
  /** 1 where skills and permissions allow, job × routes + route; as are the next three. */
  private readonly allows: Uint8Array;
  /** Stamp of the route that was looked at. */
  private readonly knownStamp: Int32Array;
  /** The best gap then; -1 where there was none for less than the price. */
  private readonly knownGap: Int16Array;
  private readonly knownPrice: Float64Array;
  private readonly alike: AlikeShifts;

  constructor(
    private readonly plan: WorkingPlan,
    private readonly random: SeededRandom,
  ) {
    const { c, routes } = plan;
    this.c = c;
    this.scan = new GapScan(c);
    this.detour = new ShopDetour(plan, this.scan);
    this.routeCount = routes.length;
    const size = c.jobCount * routes.length;
    this.allows = new Uint8Array(size);
    this.knownStamp = new Int32Array(size).fill(-1);
    this.knownGap = new Int16Array(size);
    this.knownPrice = new Float64Array(size);
    this.alike = new AlikeShifts(c);
    for (let job = 0; job < c.jobCount; job++) {
      for (let r = 0; r < routes.length; r++) {
        this.allows[job * routes.length + r] = c.mayServe[routes[r]!.row + job]!;
      }
    }
  }

  /**
   * Puts a job where it costs least, if that is less than leaving it out; whether it has been put.
   *
   * @param near where given, routes of near jobs are looked at first
   * @param blinks whether the best place on a route is passed over now and then
   */
  insert(job: number, near: Neighbours | null, blinks: boolean): boolean {
    this.find(job, near, blinks, this.c.absentPrice[job]!);
    return this.put(job);
  }

  /**
   * Puts a job beside one that is near, or on an empty route, where that costs least; whether it has
   * been put. A part that the van lacks makes it look at all gaps.
   */
  insertNear(job: number, near: Neighbours, blinks: boolean): boolean {
    const { plan, c, scan } = this;
    if (c.takesParts[job] === 1) return this.insert(job, near, blinks);
    const below = c.absentPrice[job]!;
    const blinkIn = blinks ? this.blinkIn : Infinity;
    this.route = scan.findNear(plan, job, near, this.allows, below, blinkIn);
    this.gap = scan.gap;
    this.price = scan.price;
    if (blinks) {
      this.blinkIn = scan.blinkIn;
      if (this.blinkIn <= 0) this.drawBlink();
    }
    this.lookAtEmpty(job);
    return this.put(job);
  }

  /** Looks at one empty route of each kind. */
  private lookAtEmpty(job: number): void {
    const { plan, alike, scan } = this;
    if (plan.emptyCount === 0) return;
    for (let kind = 0; kind < alike.count; kind++) {
      const r = alike.emptyOne(kind, plan.routes);
      if (r < 0 || !this.allows[job * this.routeCount + r]) continue;
      if (scan.empty(plan.routes[r]!, job, 0, this.price)) this.offer(r, 0, scan.price);
    }
  }

  private put(job: number): boolean {
    if (this.route < 0) return false;
    const { plan } = this;
    plan.touch(this.route);
    if (this.c.hasShop) plan.routes[this.route]!.cutShop();
    plan.putStop(this.route, this.gap, job);
    plan.settle(this.route);
    return true;
  }

  /** Looks for the cheapest place of a job of the bank that costs less than `below`. */
  find(job: number, near: Neighbours | null, blinks: boolean, below: number): void {
    const { plan, routeCount, knownStamp, knownPrice } = this;
    const { stampOf } = plan;
    this.route = -1;
    this.gap = -1;
    this.price = below;
    // A good place found early makes short work of most others.
    for (let k = 0; near && k < FIRST_LOOK && k < near.count; k++) {
      const r = plan.routeOf[near.list[job * near.count + k]!]!;
      if (r >= 0) this.look(r, job, false);
    }
    const base = job * routeCount;
    for (let r = 0; r < routeCount; r++) {
      const isBlink = blinks && --this.blinkIn <= 0;
      if (isBlink) this.drawBlink();
      else if (knownStamp[base + r] === stampOf[r] && knownPrice[base + r]! >= this.price) continue;
      this.look(r, job, isBlink);
    }
  }

  private look(r: number, job: number, isBlink: boolean): void {
    const { c, plan, scan } = this;
    const slot = job * this.routeCount + r;
    if (!this.allows[slot]) return;
    const route = plan.routes[r]!;
    const { technician } = route.from;
    if (c.takesParts[job] === 1) {
      if (!plan.parts.hasFor(technician, job)) return;
      if (plan.parts.wouldLack(technician, job)) {
        if (this.detour.find(r, route, job, this.price)) this.offer(r, scan.gap, scan.price);
        return;
      }
    }
    if (this.knownStamp[slot] !== plan.stampOf[r] || this.knownGap[slot]! < 0) {
      const isFound = this.lookAnew(route, job, -1);
      this.knownStamp[slot] = plan.stampOf[r]!;
      this.knownGap[slot] = isFound ? scan.gap : -1;
      this.knownPrice[slot] = isFound ? scan.price : this.price;
    }
    const gap = this.knownGap[slot]!;
    if (gap < 0) return;
    if (!isBlink) this.offer(r, gap, this.knownPrice[slot]!);
    else if (this.lookAnew(route, job, gap)) this.offer(r, scan.gap, scan.price);
  }

  private lookAnew(route: Route, job: number, without: number): boolean {
    if (route.count === 0) return without < 0 && this.scan.empty(route, job, 0, this.price);
    return this.scan.find(route, job, route.frozenCount, 0, this.price, without);
  }

  private offer(r: number, gap: number, price: number): void {
    if (price >= this.price) return;
    this.price = price;
    this.route = r;
    this.gap = gap;
  }

  private drawBlink(): void {
    this.blinkIn = 1 + floor(log(1 - this.random.unit()) / LOG_NO_BLINK);
  }
}
