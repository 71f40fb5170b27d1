/**
 * How likely each count of successes is when every trial has a chance of its own (the Poisson-binomial
 * distribution), for 0 to `chances.length` successes. Exact: trial by trial, as a sum of two cases.
 *
 * Source of the recursion: Hong, "On computing the distribution function for the Poisson binomial
 * distribution", Computational Statistics and Data Analysis 59, 2013, section 2.4 (from memory).
 */
export function successCounts(chances: readonly number[]): Float64Array {
  const counts = new Float64Array(chances.length + 1);
  counts[0] = 1;
  chances.forEach((chance, trial) => {
    for (let n = trial + 1; n >= 1; n--)
      counts[n] = counts[n]! * (1 - chance) + counts[n - 1]! * chance;
    counts[0]! *= 1 - chance;
  });
  return counts;
}

/** The chance of more than `most` successes, 0 to 1. */
export function chanceOfMore(counts: Float64Array, most: number): number {
  let sum = 0;
  // From the rare end, so that small chances are not lost beside large ones.
  for (let n = counts.length - 1; n > most; n--) sum += counts[n]!;
  return Math.min(1, sum);
}
