import type { CompiledProblem } from './compiled-problem';

// Taken once: looking a global up costs more than the sum where code runs in a sandbox.
const { max, abs } = Math;
const NEVER = Infinity;

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

/** Waiting, lost values, lateness and a moved start of a job that starts at `start`. */
export function stopPrice(c: CompiledProblem, job: number, start: number): number {
  let price = c.waitPrice[job]! * (start - c.calledAt[job]!);
  const end = c.deadlineOffset[job + 1]!;
  for (let d = c.deadlineOffset[job]!; d < end && start > c.deadlineAt[d]!; d++) {
    price += c.deadlineValue[d]!;
  }
  const late = start - c.lastWindowEnd[job]!;
  if (late > 0) price += c.weights.lateFixed + late * c.latePrice;
  // Not a number where nothing was promised, and then never more than anything.
  const moved = abs(start - c.promisedStart[job]!);
  if (moved > c.weights.movedBy) price += c.weights.churnMoved;
  return price;
}

/** What becomes of a stop's price when its start slips. */
export interface StopSlip {
  /** Price per second, as far as `straight`. */
  slope: number;
  /** Seconds until the price stops growing in a straight line. */
  straight: number;
  /** Seconds until something is lost for good: a value, or the last window. */
  reach: number;
  /** What is lost then. */
  toll: number;
  /** What a slip may save: a start that was early comes back to its promise. */
  credit: number;
}

/** Less than any two moments that differ. */
const BEFORE = 1e-6;

export function slipOf(c: CompiledProblem, job: number, start: number, slip: StopSlip): void {
  slip.slope = c.waitPrice[job]!;
  slip.straight = NEVER;
  slip.reach = NEVER;
  slip.toll = 0;
  slip.credit = 0;
  const deadlinesEnd = c.deadlineOffset[job + 1]!;
  for (let d = c.deadlineOffset[job]!; d < deadlinesEnd; d++) {
    if (start <= c.deadlineAt[d]!) {
      slip.straight = slip.reach = c.deadlineAt[d]! - start;
      slip.toll = c.deadlineValue[d]!;
      break;
    }
  }
  const windowsEnd = c.windowOffset[job + 1]!;
  for (let w = c.windowOffset[job]!; w < windowsEnd; w++) {
    const left = c.windowTo[w]! - start;
    if (left >= 0 && left < slip.straight) slip.straight = left;
  }
  const untilLate = c.lastWindowEnd[job]! - start;
  if (untilLate < 0) slip.slope += c.latePrice;
  else if (untilLate < slip.reach) {
    slip.reach = untilLate;
    slip.toll = c.weights.lateFixed;
  }
  const promised = c.promisedStart[job]!;
  if (promised > -NEVER) {
    const { movedBy, churnMoved } = c.weights;
    const early = promised - movedBy - start;
    const late = promised + movedBy - start;
    if (early > 0) {
      slip.credit = churnMoved;
      if (early - BEFORE < slip.straight) slip.straight = max(0, early - BEFORE);
    } else if (late >= 0 && late < slip.straight) slip.straight = late;
  }
}
