/** A quantile of a list of figures by the nearest rank, rounded to a tenth. */
export function quantile(figures: readonly number[], share: number): number {
  const sorted = [...figures].sort((a, b) => a - b);
  const figure = sorted[Math.min(sorted.length - 1, Math.floor(sorted.length * share))] ?? 0;
  return Math.round(figure * 10) / 10;
}

export const spread = (figures: readonly number[]) => ({
  n: figures.length,
  p50: quantile(figures, 0.5),
  p99: quantile(figures, 0.99),
  most: quantile(figures, 1),
});
