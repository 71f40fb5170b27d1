import type { CompiledProblem, ShiftStart } from './compiled-problem';
import { departure, type Departure } from './departure';
import {
  ARRIVE,
  CREDIT,
  DIRECT,
  GAP,
  NEXT,
  PEND,
  PLACE,
  READY,
  START,
  STOP_PRICE,
} from './gap-fields';
import { RouteTimes } from './route-times';
import { serviceStart, stopPrice } from './stop-price';

// Taken once: looking a global up costs more than the sum where code runs in a sandbox.
const { max } = Math;
const NEVER = Infinity;

/**
 * One technician's one shift under work. `put`, `cut` and `replace` change the order of its stops;
 * `refresh` then works out the times and the price. The stop at the shop is a stop among the others.
 */
export class Route extends RouteTimes {
  price = 0;
  /** Stops at the head of the route that never move. */
  readonly frozenCount: number;
  /** Where the stop at the shop stands, or -1. */
  shopAt = -1;
  /** Seconds of the longest drive. */
  longest = 0;
  /** Differs whenever the order differs. */
  stamp = 0;
  /** Where the technician's row of `service` and `mayServe` begins. */
  readonly row: number;
  private readonly leave: Departure = { at: 0, pending: 0, room: 0, isSwallowed: false };

  constructor(c: CompiledProblem, from: ShiftStart) {
    super(c, from);
    this.row = from.technician * c.rowLength;
    this.frozenCount = from.frozen.length;
    from.frozen.forEach((job, index) => this.put(index, job));
    this.refresh();
  }

  /** Whether the arrival home is within the overtime limit; accepted stops alone are never refused. */
  get isWithinLimit(): boolean {
    return this.count === this.frozenCount || this.end <= this.from.limit;
  }

  /** Puts a job into a gap; `refresh` has to follow. */
  put(gap: number, job: number): void {
    this.reserve(this.count + 1);
    const { stops } = this;
    for (let i = this.count; i > gap; i--) stops[i] = stops[i - 1]!;
    stops[gap] = job;
    this.count++;
  }

  /** Takes `length` stops out; `refresh` has to follow. */
  cut(first: number, length: number): void {
    const { stops } = this;
    for (let i = first + length; i < this.count; i++) stops[i - length] = stops[i]!;
    this.count -= length;
  }

  /** Replaces all stops; `refresh` has to follow. */
  replace(stops: ArrayLike<number>, count: number): void {
    this.reserve(count);
    for (let i = 0; i < count; i++) this.stops[i] = stops[i]!;
    this.count = count;
  }

  /** Takes the stop at the shop out; `refresh` has to follow. */
  cutShop(): void {
    for (let i = this.count - 1; i >= this.frozenCount; i--) {
      if (this.stops[i]! >= this.c.jobCount) this.cut(i, 1);
    }
    this.shopAt = -1;
  }

  /** Price of taking a job from the technician to whom it was promised for soon. */
  changePrice(job: number): number {
    const promised = this.c.promised[job]!;
    return promised >= 0 && promised !== this.from.technician ? this.c.weights.churnReassign : 0;
  }

  /** Recomputes times, price and slip figures from the order of the stops. */
  refresh(): void {
    const { c, count, stops, gaps, from, row } = this;
    const { travel, locations, loc, service, jobCount } = c;
    const hasBreaks = from.breaks.length > 0;
    let here = from.startLoc;
    let time = from.startAt;
    let pending = 0;
    let drive = 0;
    let longest = 0;
    let price = 0;
    let o = 0;
    this.shopAt = -1;
    for (let i = 0; i < count; i++, o += GAP) {
      const job = stops[i]!;
      const at = loc[job]!;
      const seconds = travel[here * locations + at]!;
      gaps[o + PLACE] = here;
      gaps[o + NEXT] = at;
      gaps[o + READY] = time;
      gaps[o + PEND] = pending;
      gaps[o + DIRECT] = seconds;
      if (hasBreaks) {
        departure(c, from.breaks, pending, time, job, seconds, service[row + job]!, this.leave);
        time = this.leave.at;
        pending = this.leave.pending;
      }
      if (job === jobCount) this.shopAt = i;
      const arrival = time + seconds;
      const start = serviceStart(c, job, arrival);
      const stop = stopPrice(c, job, start) + this.changePrice(job);
      gaps[o + ARRIVE] = arrival;
      gaps[o + START] = start;
      gaps[o + STOP_PRICE] = stop;
      drive += seconds;
      if (seconds > longest) longest = seconds;
      price += stop;
      time = start + service[row + job]!;
      here = at;
    }
    const home = travel[here * locations + from.endLoc]!;
    gaps[o + PLACE] = here;
    gaps[o + NEXT] = from.endLoc;
    gaps[o + READY] = time;
    gaps[o + PEND] = pending;
    gaps[o + DIRECT] = home;
    gaps[o + ARRIVE] = time + home;
    const overtime = max(0, time + home - from.shiftEnd);
    this.price =
      count === 0 ? 0 : price + (drive + home) * c.travelPrice + overtime * c.overtimePrice;
    this.longest = home > longest ? home : longest;
    this.refreshSlip();
  }

  /**
   * Price of arriving at a stop at another time, by walking through what follows until nothing differs.
   *
   * @param gap number of the stop
   * @param arrival when the technician gets there
   * @param pending first break that is not taken or fallen away by then
   * @param upTo stop counting at this price
   * @returns Infinity when the limit is broken, otherwise the price, or at least `upTo`
   */
  walk(gap: number, arrival: number, pending: number, upTo: number): number {
    const { c, count, from, stops, row, gaps } = this;
    const breakCount = from.breaks.length;
    let price = 0;
    for (let i = gap, o = gap * GAP; i < count; i++, o += GAP) {
      const job = stops[i]!;
      const start = serviceStart(c, job, arrival);
      const before = gaps[o + START]!;
      const pendBefore = gaps[o + GAP + PEND]!;
      if (start === before && pending === pendBefore) return price;
      price += stopPrice(c, job, start) + this.changePrice(job) - gaps[o + STOP_PRICE]!;
      if (start >= before && pending === breakCount && pendBefore === breakCount) {
        const least = price - gaps[o + GAP + CREDIT]!;
        if (least >= upTo) return least;
      }
      let time = start + c.service[row + job]!;
      const seconds = gaps[o + GAP + DIRECT]!;
      if (i + 1 < count && pending < breakCount) {
        const next = stops[i + 1]!;
        departure(c, from.breaks, pending, time, next, seconds, c.service[row + next]!, this.leave);
        time = this.leave.at;
        pending = this.leave.pending;
      }
      arrival = time + seconds;
    }
    if (arrival > from.limit) return NEVER;
    const overBefore = max(0, this.end - from.shiftEnd);
    const overAfter = max(0, arrival - from.shiftEnd);
    return price + (overAfter - overBefore) * c.overtimePrice;
  }
}
