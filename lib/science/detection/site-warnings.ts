import type { CalibratedRates } from "@/lib/science/detection/calibration";
import type { DetectionWarningCode } from "@/lib/science/detection/detection-warnings";
import { largestBin, shotsInHistogram, type SiteHistogram } from "@/lib/science/detection/histogram";
import type { CountModelName } from "@/lib/science/detection/count-model";
import type { FittedModel } from "@/lib/science/detection/fitted-model";
import type { OneComponent } from "@/lib/science/detection/poisson-mixture";
import type { ErrorRates } from "@/lib/science/detection/threshold";

/** Smallest 1 − ε_d − ε_b that a readout correction accepts is above this. */
const LEAST_CONTRAST = 0.2;
const OVERLAP_MEAN_ERROR = 0.1;
const RARE_SHOTS = 20;
const FEW_CALIBRATION_SHOTS = 100;

/** A site's fitted mixture; null when none was fitted. */
export type SiteFit = FittedModel | OneComponent | null;

/** Tells whether a fit has two components that its own best threshold separates. */
export function isUsable(fit: SiteFit): fit is FittedModel {
  return fit !== null && fit.kind === "two-components" && contrast(fit.ratesAt(fit.advised)) > LEAST_CONTRAST;
}

function contrast(rates: ErrorRates): number {
  return 1 - rates.falseBright - rates.falseDark;
}

/** Returns what a fit tells against itself. */
export function fitWarnings(fit: SiteFit): DetectionWarningCode[] {
  if (fit === null) return [];
  if (fit.kind === "one-component") return [fit.reason];
  if (!isUsable(fit)) return ["inseparable"];
  const { brightWeight } = fit.components;
  const rarest = fit.shots * Math.min(brightWeight, 1 - brightWeight);
  return rarest < RARE_SHOTS ? ["rare-component"] : [];
}

/** Returns what the error rates at a threshold warn of. */
export function rateWarnings(
  rates: CalibratedRates | null,
  source: "calibration" | "mixture" | null,
  model: CountModelName | null,
): DetectionWarningCode[] {
  if (rates === null) return ["rates-unknown"];
  const codes: DetectionWarningCode[] = [];
  if (source === "mixture") codes.push(model === "leakage" ? "leakage-direction" : "leakage-unseen");
  if ((rates.falseBright + rates.falseDark) / 2 > OVERLAP_MEAN_ERROR) codes.push("components-overlap");
  if (contrast(rates) <= LEAST_CONTRAST) codes.push("correction-refused");
  const { dark, bright } = rates.evidence;
  if (source === "calibration" && Math.min(dark.shots, bright.shots) < FEW_CALIBRATION_SHOTS) {
    codes.push("few-calibration-shots");
  }
  return codes;
}

/**
 * Returns whether a site reads the same in every shot. `binTop` is what the largest count of a bin exceeds its lower edge by: 0 for
 * whole counts, 1 for fractional ones (a bin that the threshold cuts through tells nothing).
 */
export function readingWarnings(histogram: SiteHistogram, threshold: number, binTop: 0 | 1): DetectionWarningCode[] {
  const least = histogram.firstBin + histogram.frequencies.findIndex((frequency) => frequency > 0);
  const largest = largestBin(histogram);
  if (shotsInHistogram(histogram) === 0) return [];
  if (largest + binTop <= threshold) return ["always-dark"];
  return least > threshold ? ["always-bright"] : [];
}
