/** Bootstrap and binomial intervals, and the standard deviation over replicates. */
import { quantileSorted, sortAscending } from "@/lib/science/stats/quantiles";
import { inverseRegularisedBeta, normalCdf, normalQuantile } from "@/lib/science/stats/special-functions";

/** `[low, high]` */
export type Interval = [number, number];

/** Returns the central `level` share of the replicates (any order, finite), with type 7 quantiles; NaN when empty. */
export function percentileInterval(replicates: ArrayLike<number>, level = 0.95): Interval {
  const sorted = sortAscending(replicates);
  return [quantileSorted(sorted, (1 - level) / 2), quantileSorted(sorted, (1 + level) / 2)];
}

/**
 * Returns the bias-corrected and accelerated bootstrap interval (Efron and Tibshirani 1993, ch. 14):
 * z₀ = Φ⁻¹(#{θ* < θ̂}/B), levels Φ(z₀ + (z₀ + z_α)/(1 − a (z₀ + z_α))), type 7 quantiles of the replicates.
 * Null when it does not exist: no replicate, or all of them on one side of the estimate, or an acceleration so
 * large that the levels turn over.
 */
export function bcaInterval(
  estimate: number,
  replicates: ArrayLike<number>,
  acceleration: number,
  level = 0.95,
): Interval | null {
  const sorted = sortAscending(replicates);
  const bias = normalQuantile(shareBelow(sorted, estimate));
  if (!Number.isFinite(bias)) return null;
  const low = bcaLevel(bias, acceleration, (1 - level) / 2);
  const high = bcaLevel(bias, acceleration, (1 + level) / 2);
  if (low === null || high === null) return null;
  return [quantileSorted(sorted, low), quantileSorted(sorted, high)];
}

/** Returns the level at which BCa reads the replicates for nominal level `p`; null where the formula has no sense. */
export function bcaLevel(bias: number, acceleration: number, p: number): number | null {
  const shifted = bias + normalQuantile(p);
  const stretch = 1 - acceleration * shifted;
  return stretch > 0 ? normalCdf(bias + shifted / stretch) : null;
}

/**
 * Returns the acceleration Σd³ / (6 (Σd²)^{3/2}), d = mean − θ₍ᵢ₎, from the estimates that leave out one unit each;
 * 0 when they are all equal.
 */
export function jackknifeAcceleration(leaveOneOut: ArrayLike<number>): number {
  const centre = mean(leaveOneOut);
  let squares = 0;
  let cubes = 0;
  for (let s = 0; s < leaveOneOut.length; s++) {
    const d = centre - leaveOneOut[s];
    squares += d * d;
    cubes += d * d * d;
  }
  return squares === 0 ? 0 : cubes / (6 * squares ** 1.5);
}

function shareBelow(sorted: Float64Array, estimate: number): number {
  if (sorted.length === 0) return Number.NaN;
  let low = 0;
  let high = sorted.length;
  while (low < high) {
    const middle = (low + high) >>> 1;
    if (sorted[middle] < estimate) low = middle + 1;
    else high = middle;
  }
  return low / sorted.length;
}

/** Returns the exact binomial interval of Clopper and Pearson (1934) for `k` of `n`; [0, 1] when n = 0. */
export function clopperPearson(k: number, n: number, level = 0.95): Interval {
  const tail = (1 - level) / 2;
  const low = k === 0 ? 0 : inverseRegularisedBeta(tail, k, n - k + 1);
  const high = k === n ? 1 : inverseRegularisedBeta(1 - tail, k + 1, n - k);
  return [low, high];
}

/** Returns the mean, updated value by value so that large offsets lose no digits; NaN when empty. */
export function mean(values: ArrayLike<number>): number {
  if (values.length === 0) return Number.NaN;
  let centre = 0;
  for (let s = 0; s < values.length; s++) centre += (values[s] - centre) / (s + 1);
  return centre;
}

/** Returns the standard deviation with n − 1 (two passes, Chan, Golub and LeVeque 1983); NaN below two values. */
export function standardDeviation(values: ArrayLike<number>): number {
  const n = values.length;
  if (n < 2) return Number.NaN;
  const centre = mean(values);
  let squares = 0;
  let drift = 0;
  for (let s = 0; s < n; s++) {
    const d = values[s] - centre;
    squares += d * d;
    drift += d;
  }
  return Math.sqrt((squares - (drift * drift) / n) / (n - 1));
}
