import { MINUTE_MS, type Instant } from './instant';

/**
 * Contents are lost at a moment that nobody knows: none before the earliest, most often near the likely
 * one, all by the latest, which is the published limit. Between the three the chance rises and falls
 * in straight lines (a triangular distribution, the usual one for an estimate of three points).
 */
export interface LossMoments {
  readonly earliestAt: Instant;
  readonly likelyAt: Instant;
  readonly saveByAt: Instant;
}

/**
 * The least time over which a value is spread, in minutes. Our estimate: one phone call. Without it
 * the last seconds of contents that nobody can reach any more would outrank everything.
 */
export const LEAST_MINUTES = 10;

/**
 * The share of a value that is lost per minute of waiting around a moment, given that it is good until
 * then: the hazard of the triangular distribution. Before the earliest moment, and never less than
 * this, the value is spread evenly over the time that is left to the latest.
 *
 * The moment before the published limit has no lower rate than any moment before it, nor has an earlier
 * loss, whichever of its three moments is the earlier.
 *
 * @param at when somebody could help
 * @returns per minute, more than 0 and at most 1 / LEAST_MINUTES
 */
export function lossRate({ earliestAt, likelyAt, saveByAt }: LossMoments, at: Instant): number {
  const most = 1 / LEAST_MINUTES;
  const left = (saveByAt - at) / MINUTE_MS;
  if (left <= 0) return most;
  const evenly = 1 / left;
  if (at >= likelyAt) return Math.min(most, 2 * evenly);
  const passed = (at - earliestAt) / MINUTE_MS;
  if (passed <= 0) return Math.min(most, evenly);
  const whole = (saveByAt - earliestAt) / MINUTE_MS;
  const rising = (likelyAt - earliestAt) / MINUTE_MS;
  const hazard = (2 * passed) / (whole * rising - passed * passed);
  return Math.min(most, Math.max(evenly, hazard));
}
