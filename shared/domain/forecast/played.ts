import { HOUR_MS, type Instant } from '../instant';
import type { ForecastTechnician } from './facts';

/** Who works, and until when. */
export interface Crew {
  readonly phoneStaff: number;
  readonly technicians: readonly ForecastTechnician[];
  /** What a stop at the store takes, without the drive; null where there is none. */
  readonly storeMs: number | null;
  /** For each, its number in the facts, for what is left of the stop under way; -1 is none. */
  readonly known: readonly number[];
}

export interface Span {
  readonly now: Instant;
  readonly until: Instant;
  /** Between two points of the curve. */
  readonly stepMs: number;
  /** How many calls may be open at once without being a backlog. */
  readonly handful: number;
}

/**
 * The backlog is empty when nobody is left to speak with or to drive to, and for so long after it no
 * more are than there are technicians to take them at once: a lull before the power comes back is no
 * end. Calls whose part is on order, or where nobody was at home, wait for others meanwhile. Our estimate.
 */
export const LULL_MS = 8 * HOUR_MS;
const LEAST_HANDFUL = 3;
export const handfulFor = (technicians: number): number => Math.max(LEAST_HANDFUL, technicians);

/** What came of one future with one crew. */
export interface Played {
  /** When nobody was left to speak with or to drive to; Infinity when that did not come. */
  readonly emptyAt: Instant;
  /** Calls open at `now` and after each step, those that wait for parts among them. */
  readonly open: Uint32Array;
  /** What was lost from now on, until it was empty; contents that nobody will cool again count whole. */
  readonly lostCents: number;
  /** Households whose medicine was lost. */
  readonly medicineLost: number;
  readonly arrivals: number;
}
