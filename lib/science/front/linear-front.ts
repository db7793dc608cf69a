import { linearFitter } from "@/lib/science/front/front-fitters";
import { fitQuality } from "@/lib/science/front/fit-quality";
import type { FrontPoints } from "@/lib/science/front/front-points";
import type { LinearFront, Parameter } from "@/lib/science/front/front-result";
import { parameterOf, reciprocalOf } from "@/lib/science/front/parameter";
import { fitReplicates, type ReplicateFits } from "@/lib/science/front/replicate-fits";
import { summariseReplicates } from "@/lib/science/front/replicate-summary";

const US_PER_MS = 1000;

/** A reported straight front with what drawing it needs: τ = offset + slope · d, and the same per replicate. */
export interface LinearFrontFitted {
  front: LinearFront;
  offset: number;
  slope: number;
  replicates: ReplicateFits;
}

/** Returns the straight front through the points with errors from the replicates; `tau` is `[trace][replicate]`, µs. */
export function linearFrontOf(
  points: FrontPoints,
  tau: Float64Array,
  replicateCount: number,
  throughOrigin: boolean,
): LinearFrontFitted {
  const fitter = linearFitter(points, throughOrigin);
  const fit = fitter(points.distance, points.time_us, points.softened_us, Int32Array.from(points.trace.keys()));
  const replicates = fitReplicates(points, tau, replicateCount, -Infinity, fitter);
  const model_us = points.distance.map((d) => fit.offset + fit.slope * d);
  const quality = fitQuality(points, model_us, throughOrigin ? 1 : 2, replicates.fitted);
  const fixedOffset: Parameter = { value: 0, error: null, low: null, high: null, fitError: null };
  const front: LinearFront = {
    throughOrigin,
    t0_us: throughOrigin
      ? fixedOffset
      : parameterOf(fit.offset, fit.offsetError, summariseReplicates(replicates.offset)),
    v_sites_per_ms: reciprocalOf(fit.slope, fit.slopeError, summariseReplicates(replicates.slope), US_PER_MS),
    ...quality,
  };
  return { front, offset: fit.offset, slope: fit.slope, replicates };
}
