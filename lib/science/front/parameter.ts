import type { Parameter, ReciprocalParameter } from "@/lib/science/front/front-result";
import type { ReplicateSummary } from "@/lib/science/front/replicate-summary";

/** Returns the number, or null when it is NaN or infinite. */
export function finiteOrNull(value: number): number | null {
  return Number.isFinite(value) ? value : null;
}

/** Returns a parameter from its fitted value, the weighted fit's error and its replicates. */
export function parameterOf(value: number, fitError: number, replicates: ReplicateSummary): Parameter {
  return {
    value: finiteOrNull(value),
    error: finiteOrNull(replicates.error),
    low: finiteOrNull(replicates.low),
    high: finiteOrNull(replicates.high),
    fitError: finiteOrNull(fitError),
  };
}

/**
 * Returns `scale / slope` as a parameter. Errors follow to first order, since replicates of a reciprocal are
 * heavy-tailed; the interval is [scale/slope_high, scale/slope_low], without upper end when slope_low ≤ 0 and
 * without any when slope_high ≤ 0.
 */
export function reciprocalOf(
  slope: number,
  fitError: number,
  replicates: ReplicateSummary,
  scale: number,
): ReciprocalParameter {
  const perSlope = scale / (slope * slope);
  const unbounded = replicates.low <= 0;
  return {
    value: finiteOrNull(scale / slope),
    error: finiteOrNull(replicates.error * perSlope),
    low: replicates.high > 0 ? finiteOrNull(scale / replicates.high) : null,
    high: unbounded ? null : finiteOrNull(scale / replicates.low),
    fitError: finiteOrNull(fitError * perSlope),
    unbounded,
  };
}
