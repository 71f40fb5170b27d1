import type { CompiledProblem } from './compiled-problem';
import { departure, type Departure } from './departure';
import {
  ARRIVE,
  CREDIT,
  DIRECT,
  GAP,
  HARD,
  LATEST,
  NEXT,
  PEND,
  PLACE,
  REACH,
  READY,
  SLACK,
  SLOPE,
  TOLL,
} from './gap-fields';
import type { Neighbours } from './neighbours';
import type { Route } from './route';
import { serviceStart, stopPrice } from './stop-price';

// Taken once: looking a global up costs more than the sum where code runs in a sandbox.
const { max } = Math;
const NEVER = Infinity;

/** Where jobs stand on the routes. */
export interface Beside {
  readonly routes: readonly Route[];
  readonly routeOf: Int32Array;
  readonly gapOf: Int32Array;
}

/** Looks through the gaps of a route for the one where a job costs least. */
export class GapScan {
  /** The best gap of the last look, the stop at the shop not counted. */
  gap = -1;
  /** The job's price there. */
  price = NEVER;
  /** Looks until the next gap that is passed over. */
  blinkIn = NEVER;
  private readonly leave: Departure = { at: 0, pending: 0, room: 0, isSwallowed: false };
  private readonly onward: Departure = { at: 0, pending: 0, room: 0, isSwallowed: false };

  constructor(private readonly c: CompiledProblem) {}

  /**
   * @param offset price of what else has to change
   * @returns whether the job fits into the empty route for less than `below`
   */
  empty(route: Route, job: number, offset: number, below: number): boolean {
    const { c } = this;
    const { from, row } = route;
    const place = c.loc[job]!;
    const there = c.travel[from.startLoc * c.locations + place]!;
    const onward = c.travel[place * c.locations + from.endLoc]!;
    const drive = offset + (there + onward) * c.travelPrice;
    if (drive + route.changePrice(job) >= below) return false;
    const service = c.service[row + job]!;
    departure(c, from.breaks, 0, from.startAt, job, there, service, this.leave);
    const start = serviceStart(c, job, this.leave.at + there);
    const end = start + service + onward;
    if (end > from.limit) return false;
    const overtime = max(0, end - from.shiftEnd) * c.overtimePrice;
    this.gap = 0;
    this.price = drive + overtime + stopPrice(c, job, start) + route.changePrice(job);
    return this.price < below;
  }

  /**
   * @param first gap to begin with, in a route that has stops
   * @param offset price of what the route has changed in besides the job
   * @param without a gap to pass over, or -1
   * @returns whether the job fits for less than `below`
   */
  find(
    route: Route,
    job: number,
    first: number,
    offset: number,
    below: number,
    without: number,
  ): boolean {
    const { c } = this;
    const { gaps, count, shopAt } = route;
    const { travel, travelTo, travelPrice } = c;
    const breakCount = route.from.breaks.length;
    const rowAt = c.loc[job]! * c.locations;
    const service = c.service[route.row + job]!;
    const waitPrice = c.waitPrice[job]!;
    const calledAt = c.calledAt[job]!;
    const lastEnd = c.lastWindowEnd[job]!;
    const lateFixed = c.weights.lateFixed;
    const fixed = offset + route.changePrice(job);
    // No drive is saved but the one through the gap.
    const floor = fixed - route.longest * travelPrice;
    const soonestEnd = serviceStart(c, job, -NEVER) + service;
    let best = below;
    let bestGap = -1;
    for (let gap = first, o = first * GAP; gap <= count; gap++, o += GAP) {
      // Far too late for the job, or what follows would be: known without looking at the drives.
      const ready = gaps[o + READY]!;
      const spare = gaps[o + CREDIT]!;
      if (ready > lastEnd && floor + lateFixed - spare >= best) {
        if (breakCount === 0) break;
        continue;
      }
      const toll = gaps[o + TOLL]!;
      if (soonestEnd > gaps[o + LATEST]! && floor + toll - spare >= best) continue;
      if (gap === without) continue;
      const there = travelTo[rowAt + gaps[o + PLACE]!]!;
      const onward = travel[rowAt + gaps[o + NEXT]!]!;
      const detour = fixed + (there + onward - gaps[o + DIRECT]!) * travelPrice;
      // Most gaps end here: driving and waiting alone cost more than the best place so far.
      const soonest = ready + there;
      const least = detour + waitPrice * (soonest - calledAt) - spare;
      if (least >= best || (soonest > lastEnd && least + lateFixed >= best)) continue;
      const price = this.priceIn(route, gap, job, there, onward, detour, best);
      if (price >= best) continue;
      best = price;
      bestGap = gap;
    }
    this.gap = shopAt >= 0 && bestGap > shopAt ? bestGap - 1 : bestGap;
    this.price = best;
    return bestGap >= 0;
  }

  /**
   * Looks at the gaps beside the jobs that are near, on all routes: with many routes a fraction of what a
   * look at all gaps takes. Empty routes and a stop at the shop are not looked at.
   *
   * @param allows 1 for routes that may take the job, from `base` on
   * @param blink looks until one gap is passed over, or Infinity; what is left of it is in `blinkIn`
   * @returns the route, or -1 where the job does not fit for less than `below`
   */
  findNear(
    plan: Beside,
    job: number,
    near: Neighbours,
    allows: Uint8Array,
    below: number,
    blink: number,
  ): number {
    const { c } = this;
    const { routes, routeOf, gapOf } = plan;
    const { travel, travelTo, travelPrice } = c;
    const rowAt = c.loc[job]! * c.locations;
    const waitPrice = c.waitPrice[job]!;
    const calledAt = c.calledAt[job]!;
    const lastEnd = c.lastWindowEnd[job]!;
    const lateFixed = c.weights.lateFixed;
    const base = job * routes.length;
    const end = (job + 1) * near.count;
    let best = below;
    let bestRoute = -1;
    let bestGap = -1;
    for (let k = job * near.count; k < end; k++) {
      const other = near.list[k]!;
      const r = routeOf[other]!;
      if (r < 0 || !allows[base + r]) continue;
      const route = routes[r]!;
      const { gaps } = route;
      const before = gapOf[other]!;
      const fixed = route.changePrice(job);
      for (let gap = before; gap <= before + 1; gap++) {
        if (gap < route.frozenCount) continue;
        if (--blink <= 0) continue;
        const o = gap * GAP;
        const there = travelTo[rowAt + gaps[o + PLACE]!]!;
        const onward = travel[rowAt + gaps[o + NEXT]!]!;
        const detour = fixed + (there + onward - gaps[o + DIRECT]!) * travelPrice;
        const soonest = gaps[o + READY]! + there;
        const least = detour + waitPrice * (soonest - calledAt) - gaps[o + CREDIT]!;
        if (least >= best || (soonest > lastEnd && least + lateFixed >= best)) continue;
        const price = this.priceIn(route, gap, job, there, onward, detour, best);
        if (price >= best) continue;
        best = price;
        bestRoute = r;
        bestGap = gap;
      }
    }
    this.blinkIn = blink;
    this.price = best;
    this.gap = bestGap;
    if (bestRoute >= 0) {
      const { shopAt } = routes[bestRoute]!;
      if (shopAt >= 0 && bestGap > shopAt) this.gap--;
    }
    return bestRoute;
  }

  /**
   * Price of a job in a gap.
   *
   * @param detour price of the drives, and of what else has to change
   * @returns the price, or anything from `below` on where it is not less
   */
  private priceIn(
    route: Route,
    gap: number,
    job: number,
    there: number,
    onward: number,
    detour: number,
    below: number,
  ): number {
    const { c } = this;
    const { gaps, from } = route;
    const breakCount = from.breaks.length;
    const o = gap * GAP;
    if (breakCount > 0 && gaps[o + PEND]! < breakCount) {
      return this.priceAmongBreaks(route, gap, job, there, onward, detour);
    }
    const start = serviceStart(c, job, gaps[o + READY]! + there);
    const price = detour + stopPrice(c, job, start);
    const spare = gaps[o + CREDIT]!;
    if (price - spare >= below) return NEVER;
    const arrival = start + c.service[route.row + job]! + onward;
    const slip = arrival - gaps[o + ARRIVE]!;
    if (slip > gaps[o + HARD]!) return NEVER;
    const slope = gaps[o + SLOPE]!;
    if (slip >= 0 && slip <= gaps[o + SLACK]!) return price + slip * slope;
    if (slip > 0) {
      let bound = price + slip * slope - spare;
      if (slip > gaps[o + REACH]!) bound += gaps[o + TOLL]!;
      if (bound >= below) return NEVER;
    }
    return price + route.walk(gap, arrival, breakCount, below - price);
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
    const o = gap * GAP;
    const { gaps } = route;
    departure(c, breaks, gaps[o + PEND]!, gaps[o + READY]!, job, there, service, leave);
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
    const slip = arrival - gaps[o + ARRIVE]!;
    const isAlike = gap === route.count || pending === gaps[o + GAP + PEND]!;
    if (isAlike && slip >= 0 && slip <= gaps[o + SLACK]!) {
      return price + slip * gaps[o + SLOPE]!;
    }
    return price + route.walk(gap, arrival, pending, NEVER);
  }
}
