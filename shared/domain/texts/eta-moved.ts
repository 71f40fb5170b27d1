import type { Instant } from '../instant';
import { MINUTE_MS } from '../instant';

/** Moved by more than this many minutes from what the customer was told: our default, no source. */
export const ETA_MOVED_MINUTES = 15;

/** Two texts about one ETA are at least this far apart: our default, no source. */
export const ETA_TEXT_GAP_MINUTES = 10;

export interface ToldEta {
  /** The arrival that the customer was last told. */
  readonly eta: Instant;
  /** When they were told. */
  readonly at: Instant;
}

export interface EtaRule {
  readonly movedMinutes: number;
  readonly gapMinutes: number;
}

export type EtaMove =
  /** Close enough to what was told. */
  | { readonly text: 'none' }
  /** Moved, but the last text is too fresh: look again at `notBefore`. */
  | { readonly text: 'later'; readonly notBefore: Instant }
  | { readonly text: 'now'; readonly laterByMinutes: number };

/**
 * Whether the customer has to hear of a new arrival time.
 *
 * It is always set against what the customer was told, never against the last computed time, so
 * that many small slips add up to a text and a jitter to and fro does not.
 */
export function etaMove(
  told: ToldEta,
  eta: Instant,
  now: Instant,
  rule: EtaRule = { movedMinutes: ETA_MOVED_MINUTES, gapMinutes: ETA_TEXT_GAP_MINUTES },
): EtaMove {
  const laterByMinutes = (eta - told.eta) / MINUTE_MS;
  if (Math.abs(laterByMinutes) <= rule.movedMinutes) return { text: 'none' };
  const notBefore = told.at + rule.gapMinutes * MINUTE_MS;
  if (now < notBefore) return { text: 'later', notBefore };
  return { text: 'now', laterByMinutes };
}

/**
 * The window that is told for an arrival: from the ETA, rounded down to five minutes, for half an
 * hour. Both figures are ours; a single minute would promise what wet roads do not keep.
 */
export function toldWindow(eta: Instant): { readonly from: Instant; readonly to: Instant } {
  const step = 5 * MINUTE_MS;
  const from = Math.floor(eta / step) * step;
  return { from, to: from + 30 * MINUTE_MS };
}
