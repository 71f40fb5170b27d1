/** What comes out in the middle, and what four of five futures lie between. */
export interface Band<T = number> {
  readonly low: T;
  readonly middle: T;
  readonly high: T;
}

/** Tenth, fiftieth and ninetieth percentile, as R-7 interpolates (Hyndman and Fan, The American Statistician 50(4), 1996). */
export function bandOf(values: readonly number[]): Band {
  const sorted = Float64Array.from(values).sort();
  return { low: at(sorted, 0.1), middle: at(sorted, 0.5), high: at(sorted, 0.9) };
}

/** As `bandOf` of moments that may never come: null is never. */
export function momentBandOf(moments: readonly number[]): Band<number | null> {
  const { low, middle, high } = bandOf(moments);
  const known = (moment: number): number | null =>
    Number.isFinite(moment) ? Math.round(moment) : null;
  return { low: known(low), middle: known(middle), high: known(high) };
}

function at(sorted: Float64Array, share: number): number {
  if (sorted.length === 0) return 0;
  const place = share * (sorted.length - 1);
  const below = sorted[Math.floor(place)]!;
  const above = sorted[Math.ceil(place)]!;
  // Between a moment and never lies never.
  return below === above ? below : below + (above - below) * (place - Math.floor(place));
}
