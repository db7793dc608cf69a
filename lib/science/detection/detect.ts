import { adviseCalibrationThreshold, calibrateSite, type CalibratedRates } from "@/lib/science/detection/calibration";
import { isFull, refusalOf, type DetectionInput, type DetectionRefusal } from "@/lib/science/detection/detection-input";
import {
  detectionWarning,
  type DetectionWarning,
  type DetectionWarningCode,
} from "@/lib/science/detection/detection-warnings";
import { largestBin, type SiteHistogram } from "@/lib/science/detection/histogram";
import { mixtureErrorRates } from "@/lib/science/detection/mixture-error-rates";
import { fitPoissonMixture, type TwoComponents } from "@/lib/science/detection/poisson-mixture";
import {
  fitWarnings,
  isUsable,
  rateWarnings,
  readingWarnings,
  type SiteFit,
} from "@/lib/science/detection/site-warnings";
import { advisePoissonThreshold } from "@/lib/science/detection/threshold";
import type { Interval } from "@/lib/science/stats/intervals";
import { median } from "@/lib/science/stats/quantiles";

/** One site of a detection; null where the method cannot tell. */
export interface DetectedSite {
  site: number;
  threshold: number;
  /** ε_d */
  falseBright: number | null;
  /** ε_b */
  falseDark: number | null;
  /** 95 % intervals: Clopper–Pearson from calibration, from the observed information with a mixture. */
  falseBrightInterval: Interval | null;
  falseDarkInterval: Interval | null;
  /** 1 − (ε_d + ε_b)/2 */
  fidelity: number | null;
  /** Draw ε anew from Beta(errors + ½, shots − errors + ½); counted for calibration, matched moments for a mixture. */
  evidence: CalibratedRates["evidence"] | null;
  ratesFrom: "calibration" | "mixture" | null;
  /** The fitted components, when a mixture was fitted and has two. */
  mixture: { dark: number; bright: number; brightWeight: number; darkError: number; brightError: number } | null;
  warnings: DetectionWarning[];
}

export interface Detected {
  kind: "detected";
  /** `[site]` */
  sites: DetectedSite[];
}

/**
 * Returns thresholds, error rates and warnings of all sites, or why there are none.
 * Thresholds: the given ones; else advised by calibration shots or mixture. A site without two usable components borrows
 * the median of the other sites; where no site has them, θ lies above every count, so that noise is not read as spins.
 * Rates: from calibration with method `calibration` and, when there is one, `fixed`; else from the mixture, if it works.
 */
export function detect(input: DetectionInput): Detected | DetectionRefusal {
  const refusal = refusalOf(input);
  if (refusal !== null) return refusal;
  const source = rateSource(input);
  const fits = input.histograms.map((histogram) =>
    source === "mixture" ? fitPoissonMixture(histogram.frequencies) : null,
  );
  const thresholds = chooseThresholds(input, fits);
  const sites = input.histograms.map((_, site) => detectSite(input, site, thresholds[site], fits[site]));
  return { kind: "detected", sites };
}

function rateSource({ method, calibration, countKind }: DetectionInput): "calibration" | "mixture" | null {
  if (method !== "mixture" && isFull(calibration)) return "calibration";
  return countKind === "whole" ? "mixture" : null;
}

interface ChosenThreshold {
  threshold: number;
  /** What stood in for the site's own counts, when they gave no threshold. */
  standIn: "threshold-borrowed" | "threshold-above-all" | null;
}

function chooseThresholds(input: DetectionInput, fits: SiteFit[]): ChosenThreshold[] {
  const { method, thresholds, histograms, calibration } = input;
  if (thresholds !== null) {
    return histograms.map((_, site) => ownThreshold(thresholds.length === 1 ? thresholds[0] : thresholds[site]));
  }
  if (method === "calibration" && isFull(calibration)) {
    return histograms.map((_, site) => ownThreshold(adviseCalibrationThreshold(calibration, site)));
  }
  const advised = fits.map((fit) => (isUsable(fit) ? advisePoissonThreshold(fit.dark, fit.bright) : null));
  const own = advised.filter((threshold) => threshold !== null);
  return advised.map((threshold, site) =>
    threshold === null ? standIn(own, histograms[site]) : ownThreshold(threshold),
  );
}

function ownThreshold(threshold: number): ChosenThreshold {
  return { threshold, standIn: null };
}

function standIn(lenders: number[], histogram: SiteHistogram): ChosenThreshold {
  if (lenders.length === 0) {
    return { threshold: Math.max(0, largestBin(histogram)) + 0.5, standIn: "threshold-above-all" };
  }
  // The median of an even number may lie between half-integers; half-integers are what is advised.
  return { threshold: Math.floor(median(lenders)) + 0.5, standIn: "threshold-borrowed" };
}

function detectSite(input: DetectionInput, site: number, chosen: ChosenThreshold, fit: SiteFit): DetectedSite {
  const { threshold } = chosen;
  const source = rateSource(input);
  const rates = ratesOf(input, site, threshold, fit);
  const codes: DetectionWarningCode[] = [
    ...fitWarnings(fit),
    ...(chosen.standIn === null ? [] : [chosen.standIn]),
    ...rateWarnings(rates, source),
    ...readingWarnings(input.histograms[site], threshold, input.countKind === "whole" ? 0 : 1),
  ];
  return {
    site,
    threshold,
    falseBright: rates?.falseBright ?? null,
    falseDark: rates?.falseDark ?? null,
    falseBrightInterval: rates?.falseBrightInterval ?? null,
    falseDarkInterval: rates?.falseDarkInterval ?? null,
    fidelity: rates === null ? null : 1 - (rates.falseBright + rates.falseDark) / 2,
    evidence: rates?.evidence ?? null,
    ratesFrom: rates === null ? null : source,
    mixture: fit?.kind === "two-components" ? componentsOf(fit) : null,
    warnings: codes.map(detectionWarning),
  };
}

function componentsOf({ dark, bright, brightWeight, darkError, brightError }: TwoComponents): DetectedSite["mixture"] {
  return { dark, bright, brightWeight, darkError, brightError };
}

function ratesOf(input: DetectionInput, site: number, threshold: number, fit: SiteFit): CalibratedRates | null {
  if (rateSource(input) === "calibration" && isFull(input.calibration)) {
    return calibrateSite(input.calibration, site, threshold);
  }
  return isUsable(fit) ? mixtureErrorRates(fit, threshold) : null;
}
