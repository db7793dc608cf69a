import type { ErrorBar, IntervalKind } from "@/lib/science/correlators/error-bars";
import { bcaInterval, percentileInterval, standardDeviation } from "@/lib/science/stats/intervals";

/**
 * Returns the standard deviation (n − 1) of the replicates and the 95 % interval of the asked kind; the acceleration is read for BCa
 * only, in whose place the percentile interval stands where it does not exist. All NaN below two replicates.
 */
export function errorBarOfReplicates(replicates: Float64Array, estimate: number, kind: IntervalKind, acceleration: number): ErrorBar {
  if (replicates.length < 2) return { error: Number.NaN, low: Number.NaN, high: Number.NaN };
  const error = standardDeviation(replicates);
  const bca = kind === "bca" ? bcaInterval(estimate, replicates, acceleration) : null;
  const [low, high] = bca ?? percentileInterval(replicates);
  return kind === "basic" ? { error, low: 2 * estimate - high, high: 2 * estimate - low } : { error, low, high };
}
