import { linearFitter, powerLawFitter } from "@/lib/science/front/front-fitters";
import { chosenPoints, LEAST_POINTS, whyNoFit, type FrontPoints } from "@/lib/science/front/front-points";
import type { PointInfluence } from "@/lib/science/front/front-result";
import type { FrontFitOptions } from "@/lib/science/front/front-rule";
import { finiteOrNull } from "@/lib/science/front/parameter";

const US_PER_MS = 1000;

/**
 * Returns what the fits would be without each of the points, in their order; the weights stay those of all points. Empty when leaving
 * one out leaves too few. `gamma` is that of all points, with its bootstrap error.
 */
export function influenceOf(
  points: FrontPoints,
  labels: readonly string[],
  options: FrontFitOptions,
  gamma: { value: number | null; error: number | null },
): PointInfluence[] {
  const count = points.trace.length;
  if (count <= LEAST_POINTS) return [];
  return Array.from({ length: count }, (_, left) => {
    const others = chosenPoints(points, Array.from({ length: count }, (_, p) => p).filter((p) => p !== left));
    const places = Int32Array.from(others.trace.keys());
    const isFitted = whyNoFit(others.distance) === null;
    const fit = (fitter: ReturnType<typeof linearFitter>) => (isFitted ? fitter(others.distance, others.time_us, others.softened_us, places).slope : NaN);
    const slope = fit(powerLawFitter(others, options.powerLawIn));
    return {
      label: labels[points.trace[left]],
      distance: points.distance[left],
      gamma: finiteOrNull(slope),
      beta: finiteOrNull(1 / slope),
      v_sites_per_ms: finiteOrNull(US_PER_MS / fit(linearFitter(others, options.throughOrigin))),
      gammaShiftInErrors: gamma.value === null || gamma.error === null ? null : finiteOrNull((slope - gamma.value) / gamma.error),
    };
  });
}
