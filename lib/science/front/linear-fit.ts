import { fitWeightedLine, fitWeightedLineThroughOrigin } from "@/lib/science/stats/least-squares";

/** τ = offset + slope · d; standard errors of the weighted fit, not rescaled by χ²/dof. */
export interface LinearFrontFit {
  /** t₀ in µs, exactly 0 through the origin. */
  offset: number;
  /** 1/v in µs per site. */
  slope: number;
  /** NaN through the origin, where the offset is no parameter. */
  offsetError: number;
  slopeError: number;
}

/**
 * Returns the straight front by least squares in τ with weights 1/σ'², all arrays `[point]`, times in µs.
 * NaN where the points do not determine it.
 */
export function fitLinearFront(
  distance: Float64Array,
  time_us: Float64Array,
  softened_us: Float64Array,
  throughOrigin: boolean,
): LinearFrontFit {
  const weights = softened_us.map((error) => 1 / (error * error));
  if (throughOrigin) {
    const { slope, slopeError } = fitWeightedLineThroughOrigin(distance, time_us, weights);
    return { offset: 0, slope, offsetError: NaN, slopeError };
  }
  const { intercept, slope, interceptError, slopeError } = fitWeightedLine(distance, time_us, weights);
  return { offset: intercept, slope, offsetError: interceptError, slopeError };
}
