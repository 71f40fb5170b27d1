/** How a call ends on the phone: it goes on to a visit, or is settled with or without cooling. */
export const TO_VISIT = 0;
export const RUNS_AGAIN = 1;
export const SETTLED_OTHERWISE = 2;

/** Everything that chance decides about each call of one future, whoever works on it; in flat lists. */
export class Fates {
  readonly length: number;
  readonly at: Float64Array;
  readonly phoneEnd: Uint8Array;
  readonly handleMs: Float64Array;
  readonly driveMs: Float64Array;
  readonly serviceMs: Float64Array;
  /** The part that it will turn out to need; -1 is none. */
  readonly part: Int8Array;
  /** 1 where nobody is at home, or a part must be ordered whatever is on the van. */
  readonly firstVisitFails: Uint8Array;
  readonly isRepaired: Uint8Array;
  /** How long it is parked before it waits again. */
  readonly parkedMs: Float64Array;
  /** After so long in line for a visit it ends by itself. */
  readonly endsAfterMs: Float64Array;
  readonly skills: Uint8Array;
  /** Multiplies its urgency: near or far, at home or not, routes do not follow urgency alone. */
  readonly pull: Float64Array;

  constructor(
    /** Calls that are open at the start; those after them ring later. */
    readonly open: number,
    later: number,
  ) {
    const length = (this.length = open + later);
    this.at = new Float64Array(length);
    this.phoneEnd = new Uint8Array(length);
    this.handleMs = new Float64Array(length);
    this.driveMs = new Float64Array(length);
    this.serviceMs = new Float64Array(length);
    this.part = new Int8Array(length);
    this.firstVisitFails = new Uint8Array(length);
    this.isRepaired = new Uint8Array(length);
    this.parkedMs = new Float64Array(length);
    this.endsAfterMs = new Float64Array(length);
    this.skills = new Uint8Array(length);
    this.pull = new Float64Array(length);
  }
}
