import { adviseCalibrationThreshold, calibrateSite, type CalibratedRates } from "@/lib/science/detection/calibration";
import {
  isFull,
  refusalOf,
  refused,
  type DetectionInput,
  type DetectionRefusal,
} from "@/lib/science/detection/detection-input";
import {
  detectionWarning,
  type DetectionWarning,
  type DetectionWarningCode,
} from "@/lib/science/detection/detection-warnings";
import { mixtureErrorRates } from "@/lib/science/detection/mixture-error-rates";
import { fitPoissonMixture } from "@/lib/science/detection/poisson-mixture";
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
  mixture: { dark: number; bright: number; brightWeight: number } | null;
  warnings: DetectionWarning[];
}

export interface Detected {
  kind: "detected";
  /** `[site]` */
  sites: DetectedSite[];
}

/**
 * Returns thresholds, error rates and warnings of all sites, or why there are none. Thresholds: the given ones; else
 * advised by calibration shots or mixture; a site with no two usable components borrows the median of the other
 * sites. Rates: from calibration with methods `calibration` and, when there is one, `fixed`; else from the mixture.
 */
export function detect(input: DetectionInput): Detected | DetectionRefusal {
  const refusal = refusalOf(input);
  if (refusal !== null) return refusal;
  const source = rateSource(input);
  const fits = input.histograms.map((histogram) =>
    source === "mixture" ? fitPoissonMixture(histogram.frequencies) : null,
  );
  const thresholds = chooseThresholds(input, fits);
  if (thresholds === null) {
    return refused(
      "method",
      "No site shows two components, so the mixture gives no threshold; give one, or add calibration shots.",
    );
  }
  const sites = input.histograms.map((_, site) => detectSite(input, site, thresholds[site], fits[site]));
  return { kind: "detected", sites };
}

function rateSource({ method, calibration, countKind }: DetectionInput): "calibration" | "mixture" | null {
  if (method !== "mixture" && isFull(calibration)) return "calibration";
  return countKind === "whole" ? "mixture" : null;
}

interface ChosenThreshold {
  threshold: number;
  borrowed: boolean;
}

function chooseThresholds(input: DetectionInput, fits: SiteFit[]): ChosenThreshold[] | null {
  const { thresholds, histograms, calibration } = input;
  if (thresholds !== null) {
    return histograms.map((_, site) => ({
      threshold: thresholds.length === 1 ? thresholds[0] : thresholds[site],
      borrowed: false,
    }));
  }
  if (input.method === "calibration" && isFull(calibration)) {
    return histograms.map((_, site) => ({ threshold: adviseCalibrationThreshold(calibration, site), borrowed: false }));
  }
  const advised = fits.map((fit) => (isUsable(fit) ? advisePoissonThreshold(fit.dark, fit.bright) : null));
  const own = advised.filter((threshold) => threshold !== null);
  if (own.length === 0) return null;
  // The median of an even number may lie between half-integers; half-integers are what is advised.
  const lent = Math.floor(median(own)) + 0.5;
  return advised.map((threshold) => ({ threshold: threshold ?? lent, borrowed: threshold === null }));
}

function detectSite(input: DetectionInput, site: number, chosen: ChosenThreshold, fit: SiteFit): DetectedSite {
  const { threshold } = chosen;
  const source = rateSource(input);
  const rates = ratesOf(input, site, threshold, fit);
  const codes: DetectionWarningCode[] = [
    ...fitWarnings(fit),
    ...(chosen.borrowed ? (["threshold-borrowed"] as const) : []),
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
    mixture:
      fit?.kind === "two-components" ? { dark: fit.dark, bright: fit.bright, brightWeight: fit.brightWeight } : null,
    warnings: codes.map(detectionWarning),
  };
}

function ratesOf(input: DetectionInput, site: number, threshold: number, fit: SiteFit): CalibratedRates | null {
  if (rateSource(input) === "calibration" && isFull(input.calibration)) {
    return calibrateSite(input.calibration, site, threshold);
  }
  return isUsable(fit) ? mixtureErrorRates(fit, threshold) : null;
}
