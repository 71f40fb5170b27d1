import type { CompiledProblem } from './compiled-problem';
import { departure, type Departure } from './departure';
import { DIRECT, PEND, PLACE, READY, STOP_PRICE } from './gap-fields';
import { Route } from './route';
import { serviceStart, stopPrice } from './stop-price';

const NEVER = Infinity;

/**
 * The cheapest order of every set of jobs on one shift, found by trying all. A set is a number with a bit
 * for each of the jobs; an order is a number too, with the first job in its highest digit.
 */
export class AllOrders {
  /** Price of the route by set; Infinity where it cannot be driven. */
  readonly price: Float64Array;
  private readonly order: Float64Array;
  private readonly leaves: Departure[];

  constructor(
    private readonly c: CompiledProblem,
    private readonly route: Route,
    private readonly jobs: readonly number[],
  ) {
    const size = 1 << jobs.length;
    this.price = new Float64Array(size).fill(NEVER);
    this.order = new Float64Array(size);
    this.leaves = jobs.map(() => ({ at: 0, pending: 0, room: 0, isSwallowed: false }));
    this.begin();
  }

  /** Jobs of the cheapest order of a set. */
  orderOf(set: number): number[] {
    const order: number[] = [];
    for (let left = this.order[set]!; left > 0; left = Math.floor(left / DIGIT)) {
      order.unshift(this.jobs[(left % DIGIT) - 1]!);
    }
    return order;
  }

  /** What the accepted stops leave: place, time, price so far. */
  private begin(): void {
    const { c } = this;
    const accepted = new Route(c, this.route.from);
    const last = accepted.count;
    let price = 0;
    for (let i = 0; i < last; i++) {
      price += accepted.at(i, STOP_PRICE) + accepted.at(i, DIRECT) * c.travelPrice;
    }
    const ready = accepted.at(last, READY);
    this.price[0] = accepted.price;
    this.goOn(0, 0, 0, accepted.at(last, PLACE), ready, accepted.at(last, PEND), price);
  }

  private goOn(
    set: number,
    code: number,
    depth: number,
    here: number,
    time: number,
    pending: number,
    price: number,
  ): void {
    const { c, route, jobs } = this;
    const { row, from } = route;
    for (let k = 0; k < jobs.length; k++) {
      const job = jobs[k]!;
      if (set & (1 << k) || !c.mayServe[row + job]) continue;
      const place = c.loc[job]!;
      const drive = c.travel[here * c.locations + place]!;
      const service = c.service[row + job]!;
      let setOff = time;
      let after = pending;
      if (pending < from.breaks.length) {
        const leave = this.leaves[depth]!;
        departure(c, from.breaks, pending, time, job, drive, service, leave);
        setOff = leave.at;
        after = leave.pending;
      }
      const start = serviceStart(c, job, setOff + drive);
      const end = start + service;
      if (end > from.limit) continue;
      const sum = price + drive * c.travelPrice + stopPrice(c, job, start) + route.changePrice(job);
      const next = set | (1 << k);
      const nextCode = code * DIGIT + k + 1;
      const home = c.travel[place * c.locations + from.endLoc]!;
      if (end + home <= from.limit) {
        const overtime = Math.max(0, end + home - from.shiftEnd);
        const whole = sum + home * c.travelPrice + overtime * c.overtimePrice;
        if (whole < this.price[next]!) {
          this.price[next] = whole;
          this.order[next] = nextCode;
        }
      }
      this.goOn(next, nextCode, depth + 1, place, end, after, sum);
    }
  }
}

const DIGIT = 16;

/** Orders of any of so many jobs, the empty one included. */
export function ordersOf(jobs: number): number {
  let orders = 1;
  for (let n = 1; n <= jobs; n++) orders = orders * n + 1;
  return orders;
}
