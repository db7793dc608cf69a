import type { BootstrapKernel } from "@/lib/science/correlators/bootstrap-kernel";
import type { BootstrapLayout } from "@/lib/science/correlators/bootstrap-layout";
import { bcaLevel } from "@/lib/science/stats/intervals";
import { normalQuantile } from "@/lib/science/stats/normal-quantile";

/** Which 95 % interval is read from the replicates. */
export type IntervalKind = "percentile" | "basic" | "bca";

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
 * Returns the standard deviation (n − 1) of the replicates at byte offset `values` and the interval of the asked kind; the
 * acceleration is read for BCa only. Where BCa does not exist (all replicates on one side of the estimate), the percentile
 * interval stands in. All NaN below two replicates.
 */
export function errorBarOf(
  kernel: BootstrapKernel,
  layout: BootstrapLayout,
  values: number,
  estimate: number,
  kind: IntervalKind,
  acceleration: number,
): ErrorBar {
  const { replicates, bins, binSizes, sorted } = layout;
  if (replicates < 2) return NO_ERROR_BAR;
  const error = kernel.spread(values, replicates);
  kernel.sortIntoBins(values, replicates, bins, binSizes);
  const [lowLevel, highLevel] = kind === "bca" ? bcaLevels(kernel, layout, values, estimate, acceleration) : [LOW, HIGH];
  const low = kernel.quantile(values, replicates, bins, binSizes, lowLevel, sorted);
  const high = kernel.quantile(values, replicates, bins, binSizes, highLevel, sorted);
  return kind === "basic" ? { error, low: 2 * estimate - high, high: 2 * estimate - low } : { error, low, high };
}

function bcaLevels(
  kernel: BootstrapKernel,
  layout: BootstrapLayout,
  values: number,
  estimate: number,
  acceleration: number,
): [number, number] {
  const bias = normalQuantile(kernel.countBelow(values, layout.replicates, estimate) / layout.replicates);
  if (!Number.isFinite(bias)) return [LOW, HIGH];
  return [bcaLevel(bias, acceleration, LOW) ?? LOW, bcaLevel(bias, acceleration, HIGH) ?? HIGH];
}
