import { adviseCalibrationThreshold, calibrateSite, type CalibratedRates } from "@/lib/science/detection/calibration";
import { isFull, refusalOf, type DetectionInput, type DetectionRefusal } from "@/lib/science/detection/detection-input";
import {
  detectionWarning,
  type DetectionWarning,
  type DetectionWarningCode,
} from "@/lib/science/detection/detection-warnings";
import { largestBin, type SiteHistogram } from "@/lib/science/detection/histogram";
import { chooseCountModel, type ChosenModel, type ModelChoice } from "@/lib/science/detection/choose-count-model";
import type { CountModelName } from "@/lib/science/detection/count-model";
import type { FittedModel } from "@/lib/science/detection/fitted-model";
import { fitPoissonMixture } from "@/lib/science/detection/poisson-mixture";
import {
  fitWarnings,
  isUsable,
  rateWarnings,
  readingWarnings,
  type SiteFit,
} from "@/lib/science/detection/site-warnings";
import type { Interval } from "@/lib/science/stats/intervals";
import { median } from "@/lib/science/stats/quantiles";

const MOST_CANDIDATES = 2048;

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
  mixture: FittedModel["components"] | null;
  warnings: DetectionWarning[];
}

export interface Detected {
  kind: "detected";
  /** `[site]` */
  sites: DetectedSite[];
  /** The model behind a mixture, and why it was taken; null without one. */
  model: ChosenModel | null;
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
  const choice = source === "mixture" ? fitSites(input) : null;
  const fits = choice?.fits ?? input.histograms.map(() => null);
  const thresholds = chooseThresholds(input, fits);
  const name = choice?.model.name ?? null;
  const sites = input.histograms.map((_, site) => detectSite(input, site, thresholds[site], fits[site], name));
  return { kind: "detected", sites, model: choice?.model ?? null };
}

function fitSites({ histograms, model }: DetectionInput): ModelChoice {
  const frequencies = histograms.map((histogram) => histogram.frequencies);
  return chooseCountModel(frequencies, frequencies.map(fitPoissonMixture), model);
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
  const advised =
    method === "calibration" && isFull(calibration)
      ? histograms.map((_, site) => adviseCalibrationThreshold(calibration, site))
      : fits.map((fit) => (isUsable(fit) ? fit.advised : null));
  const own = advised.filter((threshold) => threshold !== null);
  if (input.thresholdScope === "common" && own.length > 0) {
    const threshold = commonThreshold(input, fits, own);
    return histograms.map(() => ownThreshold(threshold));
  }
  return advised.map((threshold, site) =>
    threshold === null ? standIn(own, histograms[site]) : ownThreshold(threshold),
  );
}

/** Of the thresholds that any site would take, and the half-integers between, the one with the least mean error; of equals the lowest. */
function commonThreshold(input: DetectionInput, fits: SiteFit[], advised: number[]): number {
  const [least, most] = [Math.min(...advised), Math.max(...advised)];
  const between = Array.from({ length: Math.min(MOST_CANDIDATES, Math.ceil(most - least)) }, (_, n) => Math.floor(least) + 0.5 + n);
  const candidates = [...new Set([...advised, ...between])].filter((threshold) => threshold >= least && threshold <= most).sort((a, b) => a - b);
  const meanError = (threshold: number) => fits.reduce((sum, fit, site) => {
    const rates = ratesOf(input, site, threshold, fit);
    return rates === null ? sum : sum + rates.falseBright + rates.falseDark;
  }, 0);
  const errors = candidates.map(meanError);
  return candidates[errors.indexOf(Math.min(...errors))];
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

function detectSite(input: DetectionInput, site: number, chosen: ChosenThreshold, fit: SiteFit, model: CountModelName | null): DetectedSite {
  const { threshold } = chosen;
  const source = rateSource(input);
  const rates = ratesOf(input, site, threshold, fit);
  const codes: DetectionWarningCode[] = [
    ...fitWarnings(fit),
    ...(chosen.standIn === null ? [] : [chosen.standIn]),
    ...rateWarnings(rates, source, model),
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
    mixture: fit?.kind === "two-components" ? fit.components : null,
    warnings: codes.map(detectionWarning),
  };
}

function ratesOf(input: DetectionInput, site: number, threshold: number, fit: SiteFit): CalibratedRates | null {
  if (rateSource(input) === "calibration" && isFull(input.calibration)) {
    return calibrateSite(input.calibration, site, threshold);
  }
  return isUsable(fit) ? fit.ratesAt(threshold) : null;
}
