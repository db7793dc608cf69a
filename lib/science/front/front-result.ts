import type { CrossingStatus, CrossingWarning } from "@/lib/science/front/crossing";

/** A fitted quantity; null where there is no number. `low` and `high` are the 95 % percentile interval. */
export interface Parameter {
  value: number | null;
  /** Standard error from the full-pipeline bootstrap. */
  error: number | null;
  low: number | null;
  high: number | null;
  /** Standard error of the weighted fit alone, with softened weights, not rescaled by χ²/dof. */
  fitError: number | null;
}

/** A reciprocal: when its denominator's interval reaches zero, `high` is infinite, given as null with `unbounded`. */
export interface ReciprocalParameter extends Parameter {
  unbounded: boolean;
}

export interface FrontPoint {
  label: string;
  distance: number;
  /** Null when the trace is unresolved or does not cross. */
  time_us: number | null;
  error_us: number | null;
  low_us: number | null;
  high_us: number | null;
  status: CrossingStatus;
  /** Share of replicates without a crossing. */
  failedShare: number | null;
  level: number | null;
  /** Whether the point entered the fits. */
  fitted: boolean;
  warnings: CrossingWarning[];
}

/** How well a model fits. χ² is Σ((τ − model)/σ)² with the plain errors, or rᵀ S⁻¹ r with the joint covariance, for both models. */
export interface FitQuality {
  chi2: number;
  dof: number;
  pValue: number;
  /** Null when n ≤ p + 1. */
  aicc: number | null;
  bic: number;
  n: number;
  /** τ − model, in the order of the fitted points. */
  residuals_us: number[];
  /** Replicates whose points allowed this fit. */
  replicatesFitted: number;
}

export interface LinearFront extends FitQuality {
  throughOrigin: boolean;
  t0_us: Parameter;
  v_sites_per_ms: ReciprocalParameter;
}

export interface PowerLawFront extends FitQuality {
  fittedIn: "log-time" | "time";
  /** In sites per µs^β. */
  a: ReciprocalParameter;
  gamma: Parameter;
  beta: ReciprocalParameter;
}

export interface NoFit {
  reason: string;
}

/** Power law minus linear; null without both. */
export interface FrontComparison {
  deltaAicc: number | null;
  deltaBic: number | null;
}

export type Verdict = "faster than linear" | "slower than linear" | "not distinguishable from linear" | "no fit";

/** What the fits would be without one point. */
export interface PointInfluence {
  label: string;
  distance: number;
  gamma: number | null;
  beta: number | null;
  v_sites_per_ms: number | null;
  /** How far γ moves without the point, in units of its bootstrap error. */
  gammaShiftInErrors: number | null;
}

export interface FrontVelocity {
  /** 1/slope of the straight line, everywhere the same; null without that fit. */
  linear_sites_per_ms: ReciprocalParameter | null;
  /** v(τ) = aβτ^{β−1} at each fitted point, with its 95 % percentile interval. */
  powerLaw: {
    distance: number;
    time_us: number;
    value_sites_per_ms: number | null;
    low_sites_per_ms: number | null;
    high_sites_per_ms: number | null;
  }[];
  /** Slopes between neighbouring distances; points at one distance are averaged first. */
  betweenPoints: {
    fromDistance: number;
    toDistance: number;
    time_us: number;
    value_sites_per_ms: number | null;
    error_sites_per_ms: number | null;
  }[];
}

/** A fitted front for drawing, `[sample]`, with its pointwise 95 % band over replicates. */
export interface FrontCurve {
  distance: number[];
  time_us: (number | null)[];
  low_us: (number | null)[];
  high_us: (number | null)[];
}

/** The front of one analysis, ready for JSON: plain arrays, null for what is not a number or infinite. */
export interface FrontResult {
  points: FrontPoint[];
  linear: LinearFront | NoFit;
  powerLaw: PowerLawFront | NoFit;
  comparison: FrontComparison;
  verdict: Verdict;
  verdictSentence: string;
  verdictReasons: string[];
  velocity: FrontVelocity;
  /** What to keep in mind about the whole front, in sentences. */
  warnings: string[];
  /** The traces that entered no fit, and why. */
  unresolved: { label: string; distance: number; status: CrossingStatus; reason: string }[];
  /** Leaving out each fitted point in turn; empty where too few would be left. */
  influence: PointInfluence[];
  /** Share of the replicates whose points allow no power law; null without replicates or fit. */
  failedFitShare: number | null;
  curves: { linear: FrontCurve | null; powerLaw: FrontCurve | null };
}

/** Narrows a model's answer to the lack of a fit. */
export function isNoFit(fit: LinearFront | PowerLawFront | NoFit): fit is NoFit {
  return "reason" in fit;
}
