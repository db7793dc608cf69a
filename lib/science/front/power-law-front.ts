import { fitQuality } from "@/lib/science/front/fit-quality";
import type { FrontPoints } from "@/lib/science/front/front-points";
import type { NoFit, PowerLawFront, ReciprocalParameter } from "@/lib/science/front/front-result";
import { finiteOrNull, parameterOf, reciprocalOf } from "@/lib/science/front/parameter";
import { powerLawFitter } from "@/lib/science/front/front-fitters";
import { amplitudeErrorOf, amplitudeOf, type PowerLawFit } from "@/lib/science/front/power-law-fit";
import { fitReplicates, type ReplicateFits } from "@/lib/science/front/replicate-fits";
import { summariseReplicates, type ReplicateSummary } from "@/lib/science/front/replicate-summary";

/** A reported power law with what drawing it needs: ln τ = offset + slope · ln d, and the same per replicate. */
export interface PowerLawFrontFitted {
  front: PowerLawFront;
  offset: number;
  slope: number;
  replicates: ReplicateFits;
}

/** Returns the power law through the points with errors from the replicates; `tau` is `[trace][replicate]`, µs. */
export function powerLawFrontOf(
  points: FrontPoints,
  tau: Float64Array,
  replicateCount: number,
  fittedIn: "log-time" | "time",
): PowerLawFrontFitted | NoFit {
  const fitter = powerLawFitter(points, fittedIn);
  const fit = fitter(points.distance, points.time_us, points.softened_us, Int32Array.from(points.trace.keys()));
  if (Number.isNaN(fit.slope)) return { reason: "The power law's least squares in τ did not converge." };
  // A replicate that is at the level at t = 0 has no logarithm, and leaves the point out like a missing crossing.
  const replicates = fitReplicates(points, tau, replicateCount, 0, fitter);
  const gamma = summariseReplicates(replicates.slope);
  const model_us = points.distance.map((d) => Math.exp(fit.offset + fit.slope * Math.log(d)));
  const front: PowerLawFront = {
    fittedIn,
    a: amplitudeParameter(fit, replicates, gamma),
    gamma: parameterOf(fit.slope, fit.slopeError, gamma),
    beta: reciprocalOf(fit.slope, fit.slopeError, gamma, 1),
    ...fitQuality(points, model_us, 2, replicates.fitted),
  };
  return { front, offset: fit.offset, slope: fit.slope, replicates };
}

/** Errors of a follow to first order from those of offset and slope; its interval has no ends once γ's reaches 0. */
function amplitudeParameter(fit: PowerLawFit, replicates: ReplicateFits, gamma: ReplicateSummary): ReciprocalParameter {
  const unbounded = gamma.low <= 0;
  const lnA = -fit.offset / fit.slope;
  // d(ln a) = −(d offset + ln a · d slope)/γ, so this one combination carries the replicates' whole covariance.
  const combined = summariseReplicates(replicates.offset.map((offset, b) => offset + lnA * replicates.slope[b]));
  const a = amplitudeOf(fit.offset, fit.slope);
  const interval = summariseReplicates(replicates.offset.map((offset, b) => amplitudeOf(offset, replicates.slope[b])));
  const variances = { offset: fit.offsetError ** 2, slope: fit.slopeError ** 2, covariance: fit.covariance };
  return {
    value: finiteOrNull(a),
    error: finiteOrNull((a * combined.error) / Math.abs(fit.slope)),
    low: unbounded ? null : finiteOrNull(interval.low),
    high: unbounded ? null : finiteOrNull(interval.high),
    fitError: finiteOrNull(amplitudeErrorOf(fit.offset, fit.slope, variances)),
    unbounded,
  };
}
