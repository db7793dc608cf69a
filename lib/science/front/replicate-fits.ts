import { whyNoFit, type FrontPoints } from "@/lib/science/front/front-points";

/** A front model fitted to some points: arrays `[point]`, times in µs; `places` says where each is among all points. */
export type FrontFitter = (distance: Float64Array, time_us: Float64Array, softened_us: Float64Array, places: Int32Array) => FittedLine;

/** ln τ or τ = offset + slope · (ln d or d), with the errors of the weighted fit; NaN where there is no fit. */
export interface FittedLine {
  offset: number;
  slope: number;
  offsetError: number;
  slopeError: number;
  covariance: number;
}

/** Fitted coefficients, `[replicate]`, NaN where a replicate's points allow no fit. */
export interface ReplicateFits {
  offset: Float64Array;
  slope: Float64Array;
  fitted: number;
}

/**
 * Fits the model in every replicate, with the full data's softened errors. A point enters a replicate's fit when its
 * time there is above `above_us` (NaN never is): what is missing in one replicate is left out of that one only.
 * `tau` is `[trace][replicate]`, µs.
 */
export function fitReplicates(
  points: FrontPoints,
  tau: Float64Array,
  replicateCount: number,
  above_us: number,
  fit: FrontFitter,
): ReplicateFits {
  const offset = new Float64Array(replicateCount).fill(NaN);
  const slope = new Float64Array(replicateCount).fill(NaN);
  const distance = new Float64Array(points.trace.length);
  const time_us = new Float64Array(points.trace.length);
  const softened_us = new Float64Array(points.trace.length);
  const places = new Int32Array(points.trace.length);
  let fitted = 0;
  for (let b = 0; b < replicateCount; b++) {
    let present = 0;
    for (let p = 0; p < points.trace.length; p++) {
      const time = tau[points.trace[p] * replicateCount + b];
      if (!(time > above_us)) continue;
      distance[present] = points.distance[p];
      time_us[present] = time;
      softened_us[present] = points.softened_us[p];
      places[present] = p;
      present += 1;
    }
    const distances = distance.subarray(0, present);
    if (whyNoFit(distances) !== null) continue;
    const line = fit(distances, time_us.subarray(0, present), softened_us.subarray(0, present), places.subarray(0, present));
    if (!Number.isFinite(line.slope) || !Number.isFinite(line.offset)) continue;
    offset[b] = line.offset;
    slope[b] = line.slope;
    fitted += 1;
  }
  return { offset, slope, fitted };
}
