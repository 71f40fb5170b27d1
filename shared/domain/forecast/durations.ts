import type { Draws } from './draws';

/** What is taken for granted of a kind of work before the storm has shown any of it. */
export interface DurationPrior {
  /** Minutes on average. */
  readonly meanMinutes: number;
  /** Spread of the logarithms: 0.5 puts two thirds of the times within a factor of 1.65. */
  readonly spread: number;
  /** As if so many times had been measured. */
  readonly worth: number;
}

/** A lognormal distribution of minutes. */
export interface Duration {
  readonly mu: number;
  readonly sigma: number;
}

/** Degrees that the prior's word on the spread is worth. */
const SPREAD_WORTH = 6;

export const meanMinutes = ({ mu, sigma }: Duration): number => Math.exp(mu + (sigma * sigma) / 2);

/**
 * Draws one distribution that agrees with the prior and with what was measured: the normal and
 * inverse-gamma posterior of the logarithms (Gelman et al., "Bayesian Data Analysis", 3rd ed., 2013,
 * section 3.3; from memory). Few measurements give distributions that differ much from draw to draw.
 */
export function drawDuration(
  draws: Draws,
  prior: DurationPrior,
  measuredMinutes: readonly number[],
): Duration {
  const logs = measuredMinutes.filter((one) => one > 0).map(Math.log);
  const count = logs.length;
  const mean = count === 0 ? 0 : logs.reduce((sum, one) => sum + one, 0) / count;
  const squares = logs.reduce((sum, one) => sum + (one - mean) ** 2, 0);
  const mu0 = Math.log(prior.meanMinutes) - prior.spread ** 2 / 2;
  const weight = prior.worth + count;
  const mu = (prior.worth * mu0 + count * mean) / weight;
  const degrees = SPREAD_WORTH + count;
  const sum =
    SPREAD_WORTH * prior.spread ** 2 + squares + (prior.worth * count * (mean - mu0) ** 2) / weight;
  const variance = sum / 2 / draws.gamma(degrees / 2);
  return { mu: mu + draws.normal() * Math.sqrt(variance / weight), sigma: Math.sqrt(variance) };
}

export const drawMinutes = (draws: Draws, { mu, sigma }: Duration): number =>
  Math.exp(mu + sigma * draws.normal());

/** As `drawMinutes`, of work that has lasted `elapsed` minutes already and is not over. */
export function drawRest(draws: Draws, duration: Duration, elapsed: number): number {
  for (let tries = 0; tries < 40; tries++) {
    const minutes = drawMinutes(draws, duration);
    if (minutes > elapsed) return minutes - elapsed;
  }
  // Far longer than any that was foreseen: nobody knows, so it takes another share of the usual.
  return draws.exponential(meanMinutes(duration) / 2);
}
