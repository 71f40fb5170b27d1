import { MINUTE_MS, type Instant } from '../instant';

/** How much more a minute of medicine counts than one of food of the same price; as the queue's own. */
const MEDICINE = 5;
/** The least time over which a value is spread, as the queue's own. */
const LEAST_LEFT_MS = 10 * MINUTE_MS;

/** What is in the compartments of many calls, in flat lists, for they are looked at millions of times. */
export class Stakes {
  private readonly starts: number[] = [];
  private readonly cents: number[] = [];
  private readonly saveBy: number[] = [];
  private readonly medicine: boolean[] = [];

  /** Begins the next call. */
  begin(): void {
    this.starts.push(this.cents.length);
  }

  /** @param saveByAt Infinity where no rule says that it is lost */
  add(cents: number, saveByAt: Instant, isMedicine: boolean): void {
    this.cents.push(cents);
    this.saveBy.push(saveByAt);
    this.medicine.push(isMedicine);
  }

  /** Cents lost per millisecond that the call waits, of what a visit of this length can still save. */
  urgency(call: number, now: Instant, visitMs: number): number {
    const end = this.starts[call + 1] ?? this.cents.length;
    let urgency = 0;
    for (let i = this.starts[call]!; i < end; i++) {
      const left = this.saveBy[i]! - now;
      if (left < visitMs || left === Infinity) continue;
      const cents = this.medicine[i]! ? MEDICINE * this.cents[i]! : this.cents[i]!;
      urgency += cents / (left > LEAST_LEFT_MS ? left : LEAST_LEFT_MS);
    }
    return urgency;
  }

  /** What is lost after `from` because cooling comes back at `coolAt` only. */
  lost(call: number, from: Instant, coolAt: Instant): { cents: number; hasMedicine: boolean } {
    const end = this.starts[call + 1] ?? this.cents.length;
    let cents = 0;
    let hasMedicine = false;
    for (let i = this.starts[call]!; i < end; i++) {
      const saveBy = this.saveBy[i]!;
      if (saveBy <= from || saveBy === Infinity || saveBy > coolAt) continue;
      cents += this.cents[i]!;
      hasMedicine ||= this.medicine[i]!;
    }
    return { cents, hasMedicine };
  }
}
