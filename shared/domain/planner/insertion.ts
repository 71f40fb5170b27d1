import type { CompiledProblem } from './compiled-problem';
import { departure, type Departure } from './departure';
import type { Neighbours } from './neighbours';
import type { SeededRandom } from './random';
import { type Route } from './route';
import { ShopDetour } from './shop-detour';
import { serviceStart, stopPrice } from './stop-price';
import type { WorkingPlan } from './working-plan';

/** A position is passed over with this chance, so that the same hole is not refilled the same way. */
const BLINK_CHANCE = 0.01;

/** Finds where a job of the bank costs least. */
export class Insertion {
  /** The best place found, or -1 where leaving the job out costs less than any. */
  route = -1;
  /** Its gap, the stop at the shop not counted. */
  gap = -1;
  /** Price of the job there. */
  price = Infinity;

  private readonly c: CompiledProblem;
  /** Gaps until the next one that is passed over. */
  private blinkIn = 0;
  private blinks = false;
  private readonly kindSeen: Int32Array;
  private readonly routeSeen: Int32Array;
  private look = 0;
  private readonly leave: Departure = { at: 0, pending: 0, room: 0, isSwallowed: false };
  private readonly onward: Departure = { at: 0, pending: 0, room: 0, isSwallowed: false };
  private readonly detour: ShopDetour;

  constructor(
    private readonly plan: WorkingPlan,
    private readonly random: SeededRandom,
  ) {
    this.c = plan.c;
    this.kindSeen = new Int32Array(plan.routes.length);
    this.routeSeen = new Int32Array(plan.routes.length);
    this.detour = new ShopDetour(plan);
  }

  /** Puts a job where it costs least, if that is less than leaving it out; whether it has been put. */
  insert(job: number, near: Neighbours | null, blinks: boolean): boolean {
    this.find(job, near, blinks, this.c.absentPrice[job]!);
    if (this.route < 0) return false;
    const { plan } = this;
    plan.touch(this.route);
    if (this.c.hasShop) plan.routes[this.route]!.cutShop();
    plan.putStop(this.route, this.gap, job);
    plan.settle(this.route);
    return true;
  }

  /**
   * Looks for the cheapest place of a job that is in the bank.
   *
   * @param near where given, only gaps beside near jobs are tried, and the ends of all routes
   * @param below only places that cost less count
   */
  find(job: number, near: Neighbours | null, blinks: boolean, below: number): void {
    this.route = -1;
    this.gap = -1;
    this.price = below;
    this.blinks = blinks;
    if (blinks && this.blinkIn <= 0) this.drawBlink();
    this.look++;
    if (near && near.count > 0) this.tryNear(job, near);
    else this.tryAll(job);
  }

  private tryAll(job: number): void {
    const { routes } = this.plan;
    for (let r = 0; r < routes.length; r++) {
      const route = routes[r]!;
      if (!this.fits(route, job) || this.isSeenEmpty(route)) continue;
      this.tryRoute(r, route, job);
    }
  }

  private tryRoute(r: number, route: Route, job: number): void {
    if (this.c.hasShop && this.plan.parts.wouldLack(route.from.technician, job)) {
      this.detour.tryRoute(this, r, route, job);
    } else if (route.count === 0) this.tryEmpty(r, route, job);
    else this.scan(r, route, job, route.frozenCount, route.count, 0);
  }

  /** Tries the gaps on both sides of near jobs, and the first and last gap of every route. */
  private tryNear(job: number, near: Neighbours): void {
    const { plan, c, look, routeSeen } = this;
    const { routes, routeOf, gapOf } = plan;
    const base = job * near.count;
    for (let k = 0; k < near.count; k++) {
      const other = near.list[base + k]!;
      const r = routeOf[other]!;
      if (r < 0) continue;
      const route = routes[r]!;
      if (!this.fits(route, job)) continue;
      if (c.hasShop && plan.parts.wouldLack(route.from.technician, job)) {
        if (routeSeen[r] !== look) this.detour.tryRoute(this, r, route, job);
        routeSeen[r] = look;
        continue;
      }
      const gap = gapOf[other]!;
      this.scan(r, route, job, Math.max(gap, route.frozenCount), gap + 1, 0);
    }
    for (let r = 0; r < routes.length; r++) {
      const route = routes[r]!;
      if (!this.fits(route, job) || this.isSeenEmpty(route)) continue;
      if (c.hasShop && plan.parts.wouldLack(route.from.technician, job)) {
        if (route.count === 0) this.detour.tryRoute(this, r, route, job);
      } else if (route.count === 0) this.tryEmpty(r, route, job);
      else {
        this.scan(r, route, job, route.frozenCount, route.frozenCount, 0);
        this.scan(r, route, job, route.count, route.count, 0);
      }
    }
  }

  private fits(route: Route, job: number): boolean {
    return (
      this.c.mayServe[route.row + job] !== 0 &&
      (this.c.part[job]! < 0 || this.plan.parts.hasFor(route.from.technician, job))
    );
  }

  /** Whether an empty route of the same kind has been tried in this look. */
  private isSeenEmpty(route: Route): boolean {
    if (route.count > 0) return false;
    const { kind } = route.from;
    if (this.kindSeen[kind] === this.look) return true;
    this.kindSeen[kind] = this.look;
    return false;
  }

  /** @param offset price of what else has to change */
  tryEmpty(r: number, route: Route, job: number, offset = 0): void {
    const { c } = this;
    const { from, row } = route;
    const place = c.loc[job]!;
    const there = c.travel[from.startLoc * c.locations + place]!;
    const onward = c.travel[place * c.locations + from.endLoc]!;
    const service = c.service[row + job]!;
    departure(c, from.breaks, 0, from.startAt, job, there, service, this.leave);
    const start = serviceStart(c, job, this.leave.at + there);
    const end = start + service + onward;
    if (end > from.limit) return;
    const overtime = Math.max(0, end - from.shiftEnd) * c.overtimePrice;
    const visit = stopPrice(c, job, start) + route.changePrice(job);
    this.offer(r, 0, offset + (there + onward) * c.travelPrice + overtime + visit);
  }

  private offer(r: number, gap: number, price: number): void {
    if (price >= this.price) return;
    this.price = price;
    this.route = r;
    this.gap = gap;
  }

  /**
   * Tries the gaps `first` to `last` of a route that has stops.
   *
   * @param offset price of what the route has changed in besides the job
   */
  scan(r: number, route: Route, job: number, first: number, last: number, offset: number): void {
    const { c } = this;
    const { place, ready, pend, direct, arrive, slope, slack, hard, reach, toll, credit } = route;
    const { shopAt } = route;
    const { travel, travelTo, travelPrice } = c;
    const breakCount = route.from.breaks.length;
    const rowAt = c.loc[job]! * c.locations;
    const service = c.service[route.row + job]!;
    const waitPrice = c.waitPrice[job]!;
    const calledAt = c.calledAt[job]!;
    const lastEnd = c.lastWindowEnd[job]!;
    const lateFixed = c.weights.lateFixed;
    const fixed = offset + route.changePrice(job);
    const { blinks } = this;
    let best = this.price;
    for (let gap = first; gap <= last; gap++) {
      if (blinks && --this.blinkIn <= 0) {
        this.drawBlink();
        continue;
      }
      const there = travelTo[rowAt + place[gap]!]!;
      const onward = travel[rowAt + place[gap + 1]!]!;
      const detour = fixed + (there + onward - direct[gap]!) * travelPrice;
      if (pend[gap]! < breakCount) {
        const price = this.priceAmongBreaks(route, gap, job, there, onward, detour);
        if (price >= best) continue;
        best = price;
        this.offer(r, shopAt >= 0 && gap > shopAt ? gap - 1 : gap, price);
        continue;
      }
      // Most gaps end here: driving and waiting alone cost more than the best place so far.
      const soonest = ready[gap]! + there;
      const least = detour + waitPrice * (soonest - calledAt) - credit[gap]!;
      if (least >= best || (soonest > lastEnd && least + lateFixed >= best)) continue;
      const start = serviceStart(c, job, soonest);
      let price = detour + stopPrice(c, job, start);
      if (price - credit[gap]! >= best) continue;
      const arrival = start + service + onward;
      const slip = arrival - arrive[gap]!;
      if (slip > hard[gap]!) continue;
      if (slip >= 0 && slip <= slack[gap]!) price += slip * slope[gap]!;
      else {
        if (slip > 0) {
          let bound = price + slip * slope[gap]! - credit[gap]!;
          if (slip > reach[gap]!) bound += toll[gap]!;
          if (bound >= best) continue;
        }
        price += route.walk(gap, arrival, breakCount, best - price);
      }
      if (price >= best) continue;
      best = price;
      this.offer(r, shopAt >= 0 && gap > shopAt ? gap - 1 : gap, price);
    }
  }

  /** Price of a job in a gap before which a break is still to come. */
  private priceAmongBreaks(
    route: Route,
    gap: number,
    job: number,
    there: number,
    onward: number,
    detour: number,
  ): number {
    const { c, leave } = this;
    const { breaks } = route.from;
    const service = c.service[route.row + job]!;
    departure(c, breaks, route.pend[gap]!, route.ready[gap]!, job, there, service, leave);
    const start = serviceStart(c, job, leave.at + there);
    const price = detour + stopPrice(c, job, start);
    let time = start + service;
    let pending = leave.pending;
    if (gap < route.count) {
      const next = route.stops[gap]!;
      const work = c.service[route.row + next]!;
      departure(c, breaks, pending, time, next, onward, work, this.onward);
      time = this.onward.at;
      pending = this.onward.pending;
    }
    const arrival = time + onward;
    const slip = arrival - route.arrive[gap]!;
    const isAlike = gap === route.count || pending === route.pend[gap + 1]!;
    if (isAlike && slip >= 0 && slip <= route.slack[gap]!) {
      return price + slip * route.slope[gap]!;
    }
    return price + route.walk(gap, arrival, pending, Infinity);
  }

  private drawBlink(): void {
    this.blinkIn = 1 + Math.floor(Math.log(1 - this.random.unit()) / LOG_NO_BLINK);
  }
}

const LOG_NO_BLINK = Math.log(1 - BLINK_CHANCE);
