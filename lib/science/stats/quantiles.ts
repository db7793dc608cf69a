/**
 * Quantiles by linear interpolation between order statistics: type 7 of Hyndman and Fan (1996), the default of R and
 * NumPy. Empty input gives NaN; NaN among the values gives an undefined result.
 */

/** Returns the type 7 quantile of ascending values at `p` in [0, 1]. */
export function quantileSorted(sorted: ArrayLike<number>, p: number): number {
  if (sorted.length === 0) return Number.NaN;
  const place = (sorted.length - 1) * p;
  const below = Math.floor(place);
  const share = place - below;
  if (share === 0) return sorted[below];
  return sorted[below] + (sorted[below + 1] - sorted[below]) * share;
}

/** Returns the type 7 quantile of values in any order at `p` in [0, 1]; the input is left as it is. */
export function quantile(values: ArrayLike<number>, p: number): number {
  return quantileSorted(sortAscending(values), p);
}

/** Returns the middle value, the mean of the two middle ones when their number is even. */
export function median(values: ArrayLike<number>): number {
  return quantile(values, 0.5);
}

/** Returns the values in ascending order as a new array. */
export function sortAscending(values: ArrayLike<number>): Float64Array {
  return Float64Array.from(values).sort();
}
