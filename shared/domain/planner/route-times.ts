import type { CompiledProblem, ShiftStart } from './compiled-problem';
import { departure, type Departure } from './departure';
import { slipOf, type StopSlip } from './stop-price';

/**
 * The times of a route, and what is needed to price a slip of its later part without walking through it.
 *
 * Gap i lies before stop i; gap `count` lies before the way home. Figures of slip are about a later
 * arrival at what follows the gap.
 */
export class RouteTimes {
  count = 0;
  stops: Int32Array;
  /** Place before gap i; place after it is at i + 1. */
  place: Int32Array;
  /** When the technician is ready to leave the place before gap i. */
  ready: Float64Array;
  /** First break that is still to come at that moment. */
  pend: Int32Array;
  /** Seconds of the drive through gap i. */
  direct: Float64Array;
  /** Arrival at the place after gap i. */
  arrive: Float64Array;
  start: Float64Array;
  stopPrices: Float64Array;
  /** Price of a slip per second: exact up to `slack` seconds, and beyond no more than what it costs. */
  slope: Float64Array;
  slack: Float64Array;
  /** A slip of more seconds breaks the overtime limit. */
  hard: Float64Array;
  /** A slip of more seconds loses at least `toll`, on top of `slope`. */
  reach: Float64Array;
  toll: Float64Array;
  /** The latest arrival that does not lose it. */
  latest: Float64Array;
  /** What a slip of more than `slack` may save at most; Infinity where a break is to come. */
  credit: Float64Array;
  private capacity = 16;
  private readonly own: StopSlip = { slope: 0, straight: 0, reach: 0, toll: 0, credit: 0 };
  private readonly setOff: Departure = { at: 0, pending: 0, room: 0, isSwallowed: false };

  constructor(
    protected readonly c: CompiledProblem,
    readonly from: ShiftStart,
  ) {
    const size = this.capacity + 2;
    this.stops = new Int32Array(size);
    this.place = new Int32Array(size);
    this.pend = new Int32Array(size);
    this.ready = new Float64Array(size);
    this.direct = new Float64Array(size);
    this.arrive = new Float64Array(size);
    this.start = new Float64Array(size);
    this.stopPrices = new Float64Array(size);
    this.slope = new Float64Array(size);
    this.slack = new Float64Array(size);
    this.hard = new Float64Array(size);
    this.reach = new Float64Array(size);
    this.toll = new Float64Array(size);
    this.latest = new Float64Array(size);
    this.credit = new Float64Array(size);
  }

  /** From the last stop to the first: a stop that waits for its window swallows a slip. */
  protected refreshSlip(): void {
    const { c, count, from, stops, slope, slack, hard, reach, toll, credit, latest } = this;
    const { own, setOff } = this;
    const breakCount = from.breaks.length;
    const overrun = this.arrive[count]! - from.shiftEnd;
    slope[count] = overrun >= 0 ? c.overtimePrice : 0;
    hard[count] = from.limit - this.arrive[count]!;
    slack[count] = overrun >= 0 ? hard[count] : -overrun;
    reach[count] = Infinity;
    toll[count] = 0;
    credit[count] = 0;
    latest[count] = Infinity;
    // What follows the stop, for a slip of its end.
    let slopeAfter = slope[count];
    let slackAfter = slack[count];
    for (let i = count - 1; i >= 0; i--) {
      const job = stops[i]!;
      const begin = this.start[i]!;
      const wait = begin - this.arrive[i]!;
      slipOf(c, job, begin, own);
      credit[i] = own.credit + credit[i + 1]!;
      // A slip may change which breaks are taken, and then nothing but a walk can tell.
      if (this.pend[i + 1]! < breakCount) credit[i] = Infinity;
      const isOpen = credit[i] === Infinity;
      const onward = wait > 0 ? wait : 0;
      hard[i] = isOpen ? Infinity : onward + hard[i + 1]!;
      if (isOpen) {
        reach[i] = Infinity;
        toll[i] = 0;
      } else if (own.reach <= reach[i + 1]!) {
        reach[i] = onward + own.reach;
        toll[i] = own.toll;
      } else {
        reach[i] = onward + reach[i + 1]!;
        toll[i] = toll[i + 1]!;
      }
      latest[i] = this.arrive[i]! + reach[i]!;
      const steady = own.straight < slackAfter ? own.straight : slackAfter;
      if (wait <= 0) {
        slope[i] = own.slope + slopeAfter;
        slack[i] = steady;
      } else {
        // A wait swallows a slip; where nothing behind it has a price either, so does what follows.
        slope[i] = 0;
        slack[i] = own.slope + slopeAfter === 0 ? wait + steady : wait;
      }
      slopeAfter = slope[i]!;
      slackAfter = slack[i]!;
      if (this.pend[i]! < breakCount) {
        const seconds = this.direct[i]!;
        const work = c.service[from.technician * c.rowLength + job]!;
        departure(c, from.breaks, this.pend[i]!, this.ready[i]!, job, seconds, work, setOff);
        if (setOff.isSwallowed) slopeAfter = 0;
        slackAfter = setOff.isSwallowed ? setOff.room : Math.min(slackAfter, setOff.room);
      }
    }
  }

  protected reserve(count: number): void {
    if (count <= this.capacity) return;
    this.capacity = Math.max(count, this.capacity * 2);
    const size = this.capacity + 2;
    this.stops = grown(this.stops, new Int32Array(size));
    this.place = grown(this.place, new Int32Array(size));
    this.pend = grown(this.pend, new Int32Array(size));
    this.ready = grown(this.ready, new Float64Array(size));
    this.direct = grown(this.direct, new Float64Array(size));
    this.arrive = grown(this.arrive, new Float64Array(size));
    this.start = grown(this.start, new Float64Array(size));
    this.stopPrices = grown(this.stopPrices, new Float64Array(size));
    this.slope = grown(this.slope, new Float64Array(size));
    this.slack = grown(this.slack, new Float64Array(size));
    this.hard = grown(this.hard, new Float64Array(size));
    this.reach = grown(this.reach, new Float64Array(size));
    this.toll = grown(this.toll, new Float64Array(size));
    this.latest = grown(this.latest, new Float64Array(size));
    this.credit = grown(this.credit, new Float64Array(size));
  }
}

function grown<A extends Int32Array | Float64Array>(old: A, fresh: A): A {
  fresh.set(old);
  return fresh;
}
