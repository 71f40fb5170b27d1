import type { CompiledProblem, ShiftStart } from './compiled-problem';

/**
 * When the work on a job starts for an arrival at `arrive`: not before its earliest time, in the
 * first window that is still open, and at once when all windows are over.
 */
export function serviceStart(c: CompiledProblem, job: number, arrive: number): number {
  const earliest = c.earliest[job]!;
  const ready = arrive > earliest ? arrive : earliest;
  const end = c.windowOffset[job + 1]!;
  for (let w = c.windowOffset[job]!; w < end; w++) {
    if (ready <= c.windowTo[w]!) return ready > c.windowFrom[w]! ? ready : c.windowFrom[w]!;
  }
  return ready;
}

/** Waiting, lost values and lateness of a job that starts at `start`. */
export function stopPrice(c: CompiledProblem, job: number, start: number): number {
  let price = c.waitPrice[job]! * (start - c.calledAt[job]!);
  const end = c.deadlineOffset[job + 1]!;
  for (let d = c.deadlineOffset[job]!; d < end && start > c.deadlineAt[d]!; d++) {
    price += c.deadlineValue[d]!;
  }
  const late = start - c.lastWindowEnd[job]!;
  if (late > 0) price += c.weights.lateFixed + late * c.latePrice;
  return price;
}

/** How far a start may slip until its price stops growing in a straight line. */
function straightFor(c: CompiledProblem, job: number, start: number): number {
  let seconds = Infinity;
  const deadlinesEnd = c.deadlineOffset[job + 1]!;
  for (let d = c.deadlineOffset[job]!; d < deadlinesEnd; d++) {
    if (start <= c.deadlineAt[d]!) {
      seconds = c.deadlineAt[d]! - start;
      break;
    }
  }
  const windowsEnd = c.windowOffset[job + 1]!;
  for (let w = c.windowOffset[job]!; w < windowsEnd; w++) {
    const left = c.windowTo[w]! - start;
    if (left >= 0 && left < seconds) seconds = left;
  }
  return seconds;
}

/**
 * One technician's one shift under work, with what is needed to price a slip of its later part
 * without walking through it.
 *
 * Gap i lies before stop i; gap `count` lies before the way home. For each gap, over all that comes
 * after it: `slope` is the price of a slip per second, exact up to `slack` seconds and a lower bound
 * beyond; a slip of more than `hard` seconds breaks the overtime limit. A stop that waits for its
 * window swallows a slip: its slope is zero and its slack is the wait.
 */
export class Route {
  count = 0;
  price = 0;
  /** Stops at the head of the route that never move. */
  readonly frozenCount: number;
  stops: Int32Array;
  /** Place before gap i; place after it is at i + 1. */
  place: Int32Array;
  /** When the technician can leave the place before gap i. */
  ready: Float64Array;
  /** Arrival at the place after gap i. */
  arrive: Float64Array;
  start: Float64Array;
  stopPrices: Float64Array;
  slope: Float64Array;
  slack: Float64Array;
  hard: Float64Array;
  private capacity = 16;

  constructor(
    private readonly c: CompiledProblem,
    readonly from: ShiftStart,
  ) {
    this.frozenCount = from.frozen.length;
    this.stops = new Int32Array(this.capacity);
    this.place = new Int32Array(this.capacity + 2);
    this.ready = new Float64Array(this.capacity + 1);
    this.arrive = new Float64Array(this.capacity + 1);
    this.start = new Float64Array(this.capacity);
    this.stopPrices = new Float64Array(this.capacity);
    this.slope = new Float64Array(this.capacity + 1);
    this.slack = new Float64Array(this.capacity + 1);
    this.hard = new Float64Array(this.capacity + 1);
    from.frozen.forEach((job, index) => this.put(index, job));
    this.refresh();
  }

  /** Whether the arrival home is within the overtime limit; accepted stops alone are never refused. */
  get isWithinLimit(): boolean {
    return this.count === this.frozenCount || this.arrive[this.count]! <= this.from.limit;
  }

  /** Puts a job into a gap; `refresh` has to follow. */
  put(gap: number, job: number): void {
    this.reserve(this.count + 1);
    this.stops.copyWithin(gap + 1, gap, this.count);
    this.stops[gap] = job;
    this.count++;
  }

  /** Takes `length` stops out; `refresh` has to follow. */
  cut(first: number, length: number): void {
    this.stops.copyWithin(first, first + length, this.count);
    this.count -= length;
  }

  /** Replaces all stops; `refresh` has to follow. */
  replace(stops: ArrayLike<number>, count: number): void {
    this.reserve(count);
    for (let i = 0; i < count; i++) this.stops[i] = stops[i]!;
    this.count = count;
  }

  /** Recomputes times, price and slip figures from the order of the stops. */
  refresh(): void {
    const { c, count, stops } = this;
    const { travel, locations } = c;
    let place = this.from.startLoc;
    let time = this.from.startAt;
    let drive = 0;
    let price = 0;
    for (let i = 0; i < count; i++) {
      const job = stops[i]!;
      const seconds = travel[place * locations + c.loc[job]!]!;
      const arrive = time + seconds;
      const start = serviceStart(c, job, arrive);
      const stop = stopPrice(c, job, start) + this.changePrice(job);
      this.place[i] = place;
      this.ready[i] = time;
      this.arrive[i] = arrive;
      this.start[i] = start;
      this.stopPrices[i] = stop;
      drive += seconds;
      price += stop;
      time = start + c.service[job]!;
      place = c.loc[job]!;
    }
    const home = travel[place * locations + this.from.endLoc]!;
    this.place[count] = place;
    this.place[count + 1] = this.from.endLoc;
    this.ready[count] = time;
    this.arrive[count] = time + home;
    const overtime = Math.max(0, time + home - this.from.shiftEnd);
    this.price =
      count === 0 ? 0 : price + (drive + home) * c.travelPrice + overtime * c.overtimePrice;
    this.refreshSlip();
  }

  /** Price of taking a job from the technician to whom it was promised for soon. */
  changePrice(job: number): number {
    const promised = this.c.promised[job]!;
    return promised >= 0 && promised !== this.from.technician ? this.c.weights.churnReassign : 0;
  }

  private refreshSlip(): void {
    const { c, count } = this;
    const overrun = this.arrive[count]! - this.from.shiftEnd;
    this.slope[count] = overrun >= 0 ? c.overtimePrice : 0;
    this.slack[count] = overrun >= 0 ? Infinity : -overrun;
    this.hard[count] = this.from.limit - this.arrive[count]!;
    for (let i = count - 1; i >= 0; i--) {
      const job = this.stops[i]!;
      const start = this.start[i]!;
      const wait = start - this.arrive[i]!;
      if (wait > 0) {
        this.slope[i] = 0;
        this.slack[i] = wait;
        this.hard[i] = wait + this.hard[i + 1]!;
        continue;
      }
      const isLate = start > c.lastWindowEnd[job]!;
      const straight = straightFor(c, job, start);
      this.slope[i] = c.waitPrice[job]! + (isLate ? c.latePrice : 0) + this.slope[i + 1]!;
      this.slack[i] = straight < this.slack[i + 1]! ? straight : this.slack[i + 1]!;
      this.hard[i] = this.hard[i + 1]!;
    }
  }

  /**
   * Price of a slip of everything after a gap, by walking through it until the slip is swallowed.
   *
   * @param upTo stop counting at this price
   * @returns Infinity when the limit is broken, otherwise the price, or at least `upTo`
   */
  slipPrice(gap: number, slip: number, upTo: number): number {
    const { c } = this;
    let price = 0;
    for (let i = gap; i < this.count; i++) {
      const job = this.stops[i]!;
      const start = serviceStart(c, job, this.arrive[i]! + slip);
      slip = start - this.start[i]!;
      if (slip === 0) return price;
      price += stopPrice(c, job, start) + this.changePrice(job) - this.stopPrices[i]!;
      if (price >= upTo && slip > 0) return price;
    }
    const end = this.arrive[this.count]!;
    if (end + slip > this.from.limit) return Infinity;
    const before = Math.max(0, end - this.from.shiftEnd);
    const after = Math.max(0, end + slip - this.from.shiftEnd);
    return price + (after - before) * c.overtimePrice;
  }

  private reserve(count: number): void {
    if (count <= this.capacity) return;
    this.capacity = Math.max(count, this.capacity * 2);
    this.stops = grown(this.stops, new Int32Array(this.capacity));
    this.place = grown(this.place, new Int32Array(this.capacity + 2));
    this.ready = grown(this.ready, new Float64Array(this.capacity + 1));
    this.arrive = grown(this.arrive, new Float64Array(this.capacity + 1));
    this.start = grown(this.start, new Float64Array(this.capacity));
    this.stopPrices = grown(this.stopPrices, new Float64Array(this.capacity));
    this.slope = grown(this.slope, new Float64Array(this.capacity + 1));
    this.slack = grown(this.slack, new Float64Array(this.capacity + 1));
    this.hard = grown(this.hard, new Float64Array(this.capacity + 1));
  }
}

function grown<A extends Int32Array | Float64Array>(old: A, fresh: A): A {
  fresh.set(old);
  return fresh;
}
