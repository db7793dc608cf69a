import type { BootstrapKernel } from "@/lib/science/correlators/bootstrap-kernel";
import type { BootstrapLayout } from "@/lib/science/correlators/bootstrap-layout";
import { bcaLevel } from "@/lib/science/stats/intervals";
import { normalQuantile } from "@/lib/science/stats/normal-quantile";

/** Which 95 % interval is read from the replicates. */
export type IntervalKind = "percentile" | "bca";

/** Error bar and 95 % interval of one estimate. */
export interface ErrorBar {
  error: number;
  low: number;
  high: number;
}

const LOW = 0.025;
const HIGH = 0.975;
const NO_ERROR_BAR: ErrorBar = { error: Number.NaN, low: Number.NaN, high: Number.NaN };

/**
 * Returns the standard deviation (n − 1) and the percentile interval of the replicates at byte offset `values`, or BCa
 * when an acceleration is given. Where BCa does not exist (all replicates on one side of the estimate), the percentile
 * interval stands in. All NaN below two replicates.
 */
export function errorBarOf(
  kernel: BootstrapKernel,
  layout: BootstrapLayout,
  values: number,
  estimate: number,
  acceleration: number | null,
): ErrorBar {
  const { replicates, bins, binSizes, sorted } = layout;
  if (replicates < 2) return NO_ERROR_BAR;
  const error = kernel.spread(values, replicates);
  kernel.sortIntoBins(values, replicates, bins, binSizes);
  const [low, high] = levels(kernel, layout, values, estimate, acceleration);
  return {
    error,
    low: kernel.quantile(values, replicates, bins, binSizes, low, sorted),
    high: kernel.quantile(values, replicates, bins, binSizes, high, sorted),
  };
}

function levels(
  kernel: BootstrapKernel,
  layout: BootstrapLayout,
  values: number,
  estimate: number,
  acceleration: number | null,
): [number, number] {
  if (acceleration === null) return [LOW, HIGH];
  const bias = normalQuantile(kernel.countBelow(values, layout.replicates, estimate) / layout.replicates);
  if (!Number.isFinite(bias)) return [LOW, HIGH];
  return [bcaLevel(bias, acceleration, LOW) ?? LOW, bcaLevel(bias, acceleration, HIGH) ?? HIGH];
}
