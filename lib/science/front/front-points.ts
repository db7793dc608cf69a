import type { TraceCrossing } from "@/lib/science/front/crossing";
import type { CrossingSpread } from "@/lib/science/front/replicate-crossings";
import { median } from "@/lib/science/stats/quantiles";

/** The points that enter the fits, `[point]` in the order of the traces. */
export interface FrontPoints {
  /** Index of the point's trace. */
  trace: Int32Array;
  distance: Float64Array;
  time_us: Float64Array;
  /** σ_j */
  error_us: Float64Array;
  /** σ'_j = √(σ_j² + median(σ)²): σ_j is itself noisy, and bare weights let a lucky small one decide the fit. */
  softened_us: Float64Array;
  /** `[point][point]`, µs²: the joint covariance of the crossing times for generalised least squares; null for independent points. */
  covariance: Float64Array | null;
}

export const LEAST_POINTS = 3;

/** Returns the softened errors √(σ_j² + median(σ)²) of the points used. */
export function softenErrors(error_us: Float64Array): Float64Array {
  const middle = median(error_us);
  return error_us.map((error) => Math.hypot(error, middle));
}

/** Returns why a crossing cannot enter a fit, in words for the reader; null when it can. */
export function whyNotFitted(distance: number, crossing: TraceCrossing, spread: CrossingSpread): string | null {
  if (crossing.status === "unresolved") return "The largest signal is too weak against its error bar.";
  if (crossing.status === "no-crossing") return "The signal does not reach the level within the window.";
  if (crossing.status === "at-start") return "The signal is already at the level at the first time.";
  if (!(distance > 0)) return "The distance is zero.";
  if (Number.isNaN(spread.error_us)) return "Too few replicates cross the level to give the time an error bar.";
  if (!(spread.error_us > 0)) return "All replicates cross at the same time, so the error bar is zero.";
  return null;
}

/** Returns the points of the given traces, with softened errors. */
export function frontPointsOf(
  used: number[],
  distances: Float64Array,
  crossings: TraceCrossing[],
  spreads: CrossingSpread[],
): FrontPoints {
  const error_us = Float64Array.from(used, (j) => spreads[j].error_us);
  return {
    trace: Int32Array.from(used),
    distance: Float64Array.from(used, (j) => distances[j]),
    time_us: Float64Array.from(used, (j) => crossings[j].time_us),
    error_us,
    softened_us: used.length > 0 ? softenErrors(error_us) : error_us,
    covariance: null,
  };
}

/** Returns some of the points, by their place among the given ones, with the weights they had among all. */
export function chosenPoints(points: FrontPoints, chosen: readonly number[]): FrontPoints {
  return {
    trace: Int32Array.from(chosen, (p) => points.trace[p]),
    distance: Float64Array.from(chosen, (p) => points.distance[p]),
    time_us: Float64Array.from(chosen, (p) => points.time_us[p]),
    error_us: Float64Array.from(chosen, (p) => points.error_us[p]),
    softened_us: Float64Array.from(chosen, (p) => points.softened_us[p]),
    covariance: points.covariance && submatrix(points.covariance, points.trace.length, chosen),
  };
}

/** Returns rows and columns `chosen` of a square matrix. */
export function submatrix(matrix: Float64Array, size: number, chosen: ArrayLike<number>): Float64Array {
  const part = new Float64Array(chosen.length * chosen.length);
  for (let row = 0; row < chosen.length; row++) {
    for (let column = 0; column < chosen.length; column++) part[row * chosen.length + column] = matrix[chosen[row] * size + chosen[column]];
  }
  return part;
}

/** Returns why these distances allow no fit of two parameters, or null. */
export function whyNoFit(distance: Float64Array): string | null {
  if (distance.length < LEAST_POINTS) {
    return `A fit needs at least ${LEAST_POINTS} resolved points with an error bar; there ${distance.length === 1 ? "is" : "are"} ${distance.length}.`;
  }
  if (!hasTwoDistances(distance)) return "All resolved points lie at the same distance.";
  return null;
}

function hasTwoDistances(distance: Float64Array): boolean {
  return distance.some((d) => Math.abs(d - distance[0]) > SAME_DISTANCE);
}

/** Distances closer than this are the same distance. */
export const SAME_DISTANCE = 1e-6;
