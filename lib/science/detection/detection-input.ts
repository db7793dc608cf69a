import type { CountModelName } from "@/lib/science/detection/count-model";
import { shotsOf, type CalibrationCounts } from "@/lib/science/detection/calibration";
import type { SiteHistogram } from "@/lib/science/detection/histogram";

export type DetectionMethod = "fixed" | "mixture" | "calibration";

export interface DetectionInput {
  method: DetectionMethod;
  /** What a mixture's components follow; `auto` lets BIC choose. */
  model: CountModelName | "auto";
  /** Whether advised thresholds are each site's own, or one for all with the least mean error. */
  thresholdScope: "site" | "common";
  /** One for all sites or one per site, kept as they are with any method; null lets the method find them. */
  thresholds: readonly number[] | null;
  /** `[site]`, over all kept shots of the run; whole counts start at bin 0. */
  histograms: readonly SiteHistogram[];
  /** Whether the run's counts are whole (uint16) or fractional (float32). */
  countKind: "whole" | "fractional";
  /** Null, or without shots of one kind, when the run has no full calibration. */
  calibration: CalibrationCounts | null;
}

/** Why no detection can be made: `where` names the request's field. */
export interface DetectionRefusal {
  kind: "refused";
  where: "method" | "thresholds";
  message: string;
}

/** Returns why a detection cannot be made from this input, or null when it can be tried. */
export function refusalOf(input: DetectionInput): DetectionRefusal | null {
  const { method, thresholds, histograms, countKind, calibration } = input;
  if (thresholds !== null && thresholds.length !== 1 && thresholds.length !== histograms.length) {
    return refused(
      "thresholds",
      `There are ${histograms.length} sites but ${thresholds.length} thresholds; give one, or one per site.`,
    );
  }
  const wild = thresholds?.findIndex((threshold) => !Number.isFinite(threshold)) ?? -1;
  if (wild >= 0) return refused("thresholds", `The threshold at place ${wild} is not a finite number.`);
  if (method === "fixed" && thresholds === null) {
    return refused("thresholds", "The fixed method needs a threshold: one for all sites, or one per site.");
  }
  if (method === "mixture" && countKind === "fractional") {
    return refused(
      "method",
      "A Poisson mixture needs whole counts, and this run's are fractional; use calibration shots or fixed thresholds.",
    );
  }
  if (method === "calibration" && !isFull(calibration)) {
    return refused(
      "method",
      "The calibration method needs calibration shots of both kinds, prepared dark and prepared bright.",
    );
  }
  if (calibration !== null && calibration.sites !== histograms.length && isFull(calibration)) {
    return refused("method", `The calibration shots have ${calibration.sites} sites, the run ${histograms.length}.`);
  }
  return null;
}

function refused(where: DetectionRefusal["where"], message: string): DetectionRefusal {
  return { kind: "refused", where, message };
}

/** Tells whether there are calibration shots of both kinds. */
export function isFull(calibration: CalibrationCounts | null): calibration is CalibrationCounts {
  if (calibration === null) return false;
  return shotsOf(calibration.dark, calibration.sites) > 0 && shotsOf(calibration.bright, calibration.sites) > 0;
}
