import { fitWeightedLine } from "@/lib/science/stats/least-squares";

/** ln τ = offset + slope · ln d with slope γ = 1/β and offset −γ ln a; errors of the weighted fit, not rescaled. */
export interface PowerLawFit {
  offset: number;
  /** γ */
  slope: number;
  offsetError: number;
  slopeError: number;
  /** Covariance of offset and slope. */
  covariance: number;
}

/**
 * Returns the power law d = a τ^β by least squares in ln τ with weights (τ/σ')², all arrays `[point]`, times in µs.
 * Distances and times must be positive. NaN where the points do not determine it.
 */
export function fitPowerLaw(distance: Float64Array, time_us: Float64Array, softened_us: Float64Array): PowerLawFit {
  const weights = softened_us.map((error, j) => (time_us[j] / error) ** 2);
  const { intercept, slope, interceptError, slopeError, covariance } = fitWeightedLine(
    distance.map(Math.log),
    time_us.map(Math.log),
    weights,
  );
  return { offset: intercept, slope, offsetError: interceptError, slopeError, covariance };
}

/** Returns a = exp(−offset/γ), in sites per µs^β. */
export function amplitudeOf(offset: number, slope: number): number {
  return Math.exp(-offset / slope);
}

/**
 * Returns the standard error of a by first-order propagation, from variances and covariance of offset and slope.
 */
export function amplitudeErrorOf(
  offset: number,
  slope: number,
  variances: { offset: number; slope: number; covariance: number },
): number {
  const lnA = -offset / slope;
  const variance = variances.offset + 2 * lnA * variances.covariance + lnA * lnA * variances.slope;
  return (Math.exp(lnA) * Math.sqrt(Math.max(0, variance))) / Math.abs(slope);
}
