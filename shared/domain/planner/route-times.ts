import type { CompiledProblem, ShiftStart } from './compiled-problem';
import { departure, type Departure } from './departure';
import {
  ARRIVE,
  CREDIT,
  DIRECT,
  GAP,
  HARD,
  LATEST,
  PEND,
  REACH,
  READY,
  SLACK,
  SLOPE,
  START,
  TOLL,
} from './gap-fields';
import { slipOf, type StopSlip } from './stop-price';

// Taken once: looking a global up costs more than the sum where code runs in a sandbox.
const { max, min } = Math;
const NEVER = Infinity;

/** The times of a route, and what is needed to price a slip of its later part without walking through it. */
export class RouteTimes {
  count = 0;
  stops: Int32Array;
  /** By the fields of gap-fields.ts. */
  gaps: Float64Array;
  private capacity = 16;
  private readonly own: StopSlip = { slope: 0, straight: 0, reach: 0, toll: 0, credit: 0 };
  private readonly setOff: Departure = { at: 0, pending: 0, room: 0, isSwallowed: false };

  constructor(
    protected readonly c: CompiledProblem,
    readonly from: ShiftStart,
  ) {
    this.stops = new Int32Array(this.capacity);
    this.gaps = new Float64Array((this.capacity + 1) * GAP);
  }

  /** A field of a gap, by number of the gap. */
  at(gap: number, field: number): number {
    return this.gaps[gap * GAP + field]!;
  }

  /** Arrival where the shift ends. */
  get end(): number {
    return this.gaps[this.count * GAP + ARRIVE]!;
  }

  /** From the last stop to the first: a stop that waits for its window swallows a slip. */
  protected refreshSlip(): void {
    const { c, count, from, stops, gaps, own } = this;
    const breakCount = from.breaks.length;
    const last = count * GAP;
    const overrun = gaps[last + ARRIVE]! - from.shiftEnd;
    // What follows the stop, for a slip of its end.
    let hard = from.limit - gaps[last + ARRIVE]!;
    let slope = overrun >= 0 ? c.overtimePrice : 0;
    let slack = overrun >= 0 ? hard : -overrun;
    let reach = NEVER;
    let toll = 0;
    let credit = 0;
    gaps[last + SLOPE] = slope;
    gaps[last + SLACK] = slack;
    gaps[last + HARD] = hard;
    gaps[last + REACH] = reach;
    gaps[last + TOLL] = toll;
    gaps[last + CREDIT] = credit;
    gaps[last + LATEST] = NEVER;
    for (let i = count - 1, o = last - GAP; i >= 0; i--, o -= GAP) {
      const job = stops[i]!;
      const start = gaps[o + START]!;
      const wait = max(0, start - gaps[o + ARRIVE]!);
      slipOf(c, job, start, own);
      credit += own.credit;
      if (own.reach <= reach) {
        reach = own.reach;
        toll = own.toll;
      }
      reach += wait;
      hard += wait;
      // A slip may change which breaks are taken, and then nothing but a walk can tell.
      if (gaps[o + GAP + PEND]! < breakCount) {
        credit = NEVER;
        hard = NEVER;
        reach = NEVER;
        toll = 0;
      }
      slope += own.slope;
      if (own.straight < slack) slack = own.straight;
      if (wait > 0) {
        // A wait swallows a slip; where nothing behind it has a price either, so does what follows.
        slack = slope === 0 ? wait + slack : wait;
        slope = 0;
      }
      gaps[o + SLOPE] = slope;
      gaps[o + SLACK] = slack;
      gaps[o + HARD] = hard;
      gaps[o + REACH] = reach;
      gaps[o + TOLL] = toll;
      gaps[o + CREDIT] = credit;
      gaps[o + LATEST] = gaps[o + ARRIVE]! + reach;
      if (gaps[o + PEND]! < breakCount) {
        const { setOff } = this;
        const work = c.service[from.technician * c.rowLength + job]!;
        const ready = gaps[o + READY]!;
        departure(c, from.breaks, gaps[o + PEND]!, ready, job, gaps[o + DIRECT]!, work, setOff);
        if (setOff.isSwallowed) slope = 0;
        slack = setOff.isSwallowed ? setOff.room : min(slack, setOff.room);
      }
    }
  }

  protected reserve(count: number): void {
    if (count <= this.capacity) return;
    this.capacity = max(count, this.capacity * 2);
    const stops = new Int32Array(this.capacity);
    stops.set(this.stops);
    this.stops = stops;
    const gaps = new Float64Array((this.capacity + 1) * GAP);
    gaps.set(this.gaps);
    this.gaps = gaps;
  }
}
