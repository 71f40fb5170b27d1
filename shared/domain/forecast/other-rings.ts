import { HOUR_MS, type Instant } from '../instant';
import type { Draws } from './draws';
import { logGamma } from './log-gamma';
import type { RingClock } from './ring-clock';

/** Calls that belong to no outage area: a stream that swells or fades, by one draw. */
export interface OtherRings {
  /** Calls a ringing hour now. */
  readonly now: number;
  /** By how much of itself the rate falls each ringing hour. */
  readonly fading: number;
}

/** How far back the rate is looked at. Our estimate: what is older tells of another phase of the storm. */
const LOOK_BACK_MS = 18 * HOUR_MS;
/** Ringing hours in which the rate halves, and how believable each is beforehand. Our estimate. */
const HALVINGS: readonly (readonly [hours: number, weight: number])[] = [
  [4, 0.5],
  [7, 1],
  [12, 1.6],
  [20, 1.6],
  [34, 1],
  [60, 0.7],
  [-40, 0.3],
];
/** No stream goes on for ever: one that swells now fades as slowly as this. */
const SLOWEST_HALVING = 60;
/** The rate before anything is known: as if this many calls had come in this many ringing hours. */
const PRIOR_CALLS = 0.8;
const PRIOR_HOURS = 1.6;

/** Draws rates that agree with the calls seen so far: the gamma posterior for each way of fading. */
export function drawOtherRings(
  draws: Draws,
  ringsAt: readonly Instant[],
  since: Instant,
  now: Instant,
  clock: RingClock,
  count: number,
): readonly OtherRings[] {
  const from = Math.max(Math.min(since, now), now - LOOK_BACK_MS);
  const span = clock.between(from, now);
  const ages = ringsAt.filter((at) => at >= from && at <= now).map((at) => clock.between(at, now));
  const age = ages.reduce((sum, one) => sum + one, 0);
  const choices = HALVINGS.map(([hours, weight]) => {
    const fading = Math.LN2 / hours;
    const seen = span === 0 ? 0 : Math.expm1(fading * span) / fading;
    const shape = PRIOR_CALLS + ages.length;
    const rate = PRIOR_HOURS + seen;
    const score = Math.log(weight) + logGamma(shape) - shape * Math.log(rate) + fading * age;
    return { fading, shape, rate, score };
  });
  const most = Math.max(...choices.map(({ score }) => score));
  const total = choices.reduce((sum, { score }) => sum + Math.exp(score - most), 0);
  return Array.from({ length: count }, () => {
    let left = draws.unit() * total;
    const chosen =
      choices.find(({ score }) => (left -= Math.exp(score - most)) <= 0) ?? choices[0]!;
    return {
      now: draws.gamma(chosen.shape, chosen.rate),
      fading: Math.max(chosen.fading, Math.LN2 / SLOWEST_HALVING),
    };
  });
}
