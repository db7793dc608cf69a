import { whyNoFit, softenErrors } from "@/lib/science/front/front-points";
import type { FrontFitOptions } from "@/lib/science/front/front-rule";
import { fitLinearFront } from "@/lib/science/front/linear-fit";
import { fitPowerLaw } from "@/lib/science/front/power-law-fit";
import { fitPowerLawInTime } from "@/lib/science/front/power-law-in-time-fit";
import type { SweepCombination, SweptNumber } from "@/lib/science/studies/sweep-result";

/** Points of one combination, all `[point]`, times in µs. */
export interface SweepPoints {
  distance: Float64Array;
  time_us: Float64Array;
  error_us: Float64Array;
}

const US_PER_MS = 1000;
/** Of an error, for central differences. */
const STEP = 1e-4;

/**
 * Returns both fits of the points with the weights of any analysis (softened errors). Errors follow from the points' own
 * errors, taken as independent, to first order through the whole fit.
 */
export function fitSweepPoints(points: SweepPoints, { throughOrigin, powerLawIn }: FrontFitOptions): Omit<SweepCombination, "choices"> {
  const { distance } = points;
  const reason = whyNoFit(distance);
  const none = { gamma: null, beta: null, v_sites_per_ms: null, points: distance.length };
  if (reason !== null) return { ...none, reason };
  const softened_us = softenErrors(points.error_us);
  const fitter = powerLawIn === "time" ? fitPowerLawInTime : fitPowerLaw;
  const gamma = withError(points, (time_us) => fitter(distance, time_us, softened_us).slope);
  const slope = withError(points, (time_us) => fitLinearFront(distance, time_us, softened_us, throughOrigin).slope);
  if (gamma === null) return { ...none, reason: "The power law's least squares did not converge." };
  return { gamma, beta: reciprocal(gamma, 1), v_sites_per_ms: slope && reciprocal(slope, US_PER_MS), points: distance.length, reason: null };
}

function withError({ time_us, error_us }: SweepPoints, estimate: (time_us: Float64Array) => number): SweptNumber | null {
  const value = estimate(time_us);
  const moved = Float64Array.from(time_us);
  let variance = 0;
  for (let j = 0; j < time_us.length; j++) {
    const step = Math.min(STEP * error_us[j], time_us[j] / 2);
    moved[j] = time_us[j] + step;
    const above = estimate(moved);
    moved[j] = time_us[j] - step;
    const below = estimate(moved);
    moved[j] = time_us[j];
    variance += (((above - below) / (2 * step)) * error_us[j]) ** 2;
  }
  return Number.isFinite(value) && Number.isFinite(variance) ? { value, error: Math.sqrt(variance) } : null;
}

function reciprocal({ value, error }: SweptNumber, scale: number): SweptNumber | null {
  return value === 0 ? null : { value: scale / value, error: (scale * error) / (value * value) };
}
