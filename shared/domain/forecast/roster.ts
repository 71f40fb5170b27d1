import { MINUTE_MS, type Instant } from '../instant';
import type { WorkShift } from '../route-rules';
import type { ForecastTechnician } from './facts';

/** Before each later shift a van gets so many of each part at least. Our estimate. */
const FILLED_UP = 2;

/** Who is on which shift, what has been used of each van, and which breaks were taken. */
export class Roster {
  private readonly vans: number[][];
  private readonly shiftNow: Int32Array;
  private readonly breaksTaken: Uint8Array;
  private readonly idleSince: Float64Array;

  constructor(private readonly technicians: readonly ForecastTechnician[]) {
    const { length } = technicians;
    this.vans = technicians.map(({ van }) => [...van]);
    this.shiftNow = new Int32Array(length).fill(-1);
    this.breaksTaken = new Uint8Array(length);
    this.idleSince = new Float64Array(length).fill(Infinity);
  }

  /** The first shift that is not over; -1 is none. */
  shiftAt(technician: number, at: Instant): number {
    return this.technicians[technician]!.shifts.findIndex(({ endsAt }) => endsAt > at);
  }

  /**
   * Puts a technician on a shift. What the van carries is made good before every later one; no part that
   * it needs stays out for good.
   */
  begin(technician: number, shift: number): void {
    if (shift === this.shiftNow[technician]) return;
    if (this.shiftNow[technician]! >= 0)
      this.vans[technician] = this.technicians[technician]!.van.map((n) => Math.max(FILLED_UP, n));
    this.shiftNow[technician] = shift;
    this.breaksTaken[technician] = 0;
  }

  /** When a break that is due is over; `at` when none is. Whoever had nothing to do has had it. */
  afterBreak(technician: number, { breaks = [] }: WorkShift, at: Instant): Instant {
    const due = breaks[this.breaksTaken[technician]!];
    if (!due || due.from > at) return at;
    this.breaksTaken[technician]!++;
    const begins = Math.max(due.from, Math.min(at, this.idleSince[technician]!));
    return begins > due.to ? at : Math.max(at, begins + due.minutes * MINUTE_MS);
  }

  rests(technician: number, at: Instant): void {
    this.idleSince[technician] = Math.min(this.idleSince[technician]!, at);
  }

  works(technician: number): void {
    this.idleSince[technician] = Infinity;
  }

  has(technician: number, part: number): boolean {
    return (this.vans[technician]![part] ?? 0) > 0;
  }

  uses(technician: number, part: number): void {
    this.vans[technician]![part]!--;
  }
}
