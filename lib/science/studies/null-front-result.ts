import type { NearestNeighbourModel } from "@/lib/science/theory/nearest-neighbour";

/** Quantiles of one quantity over the simulated repeats that carry a fit; null where there are none. */
export interface SpreadOfRepeats {
  low: number | null;
  lowerQuarter: number | null;
  median: number | null;
  upperQuarter: number | null;
  high: number | null;
}

/** The coupling of the nearest-neighbour model, and where it comes from. */
export interface NullCoupling {
  /** J/2π */
  j_hz: number;
  /** `given`: the run's largest coupling. `matched`: the model crosses at the observed time at `matchedDistance`. */
  source: "given" | "matched";
  /** In mean spacings; null when the coupling is given. */
  matchedDistance: number | null;
}

/** What the extractor reads from one simulated repeat; null where it gives no number. */
export interface NullFrontRepeat {
  gamma: number | null;
  beta: number | null;
  v_sites_per_ms: number | null;
  /** Points that can enter a fit. */
  points: number;
  /** The farthest distance of such a point, 0 without any. */
  reach: number;
  verdict: string;
}

/** The extractor on the model's exact traces, without noise, with the errors expected at the run's shots as weights. */
export interface NoiseFreeFront {
  gamma: number | null;
  beta: number | null;
  v_sites_per_ms: number | null;
  points: { label: string; distance: number; time_us: number | null; fitted: boolean }[];
}

/** The null front of one analysis, ready for JSON. */
export interface NullFrontResult {
  model: NearestNeighbourModel;
  coupling: NullCoupling;
  repeats: number;
  /** Repeats with a power-law fit: only these enter the quantiles and the p-value. */
  fitted: number;
  /** Null without repeats. */
  shareWithoutFit: number | null;
  observed: { gamma: number | null; beta: number | null; reach: number };
  noiseFree: NoiseFreeFront;
  /** 2.5, 25, 50, 75 and 97.5 % quantiles. */
  gamma: SpreadOfRepeats;
  beta: SpreadOfRepeats;
  v_sites_per_ms: SpreadOfRepeats;
  /** γ of every repeat in order, null without a fit; for the histogram. */
  gammas: (number | null)[];
  /** Share of repeats in which the extractor's own verdict is "faster than linear"; null without repeats. */
  fasterThanLinearShare: number | null;
  /** The farthest distance with a usable crossing. */
  reach: SpreadOfRepeats;
  /**
   * What is compared, chosen by the repeats alone: `exponent`, γ, where most carry a fit; else `reach`, the farthest distance at
   * which a crossing is seen within the run's times, since a model that is seen at two distances has no exponent.
   */
  statistic: "exponent" | "reach";
  /**
   * `exponent`: (1 + #{γ_null ≤ γ_observed})/(fitted + 1). `reach`: (1 + #{reach_null ≥ reach_observed})/(repeats + 1).
   * Null without an observed γ, or without repeats.
   */
  pValue: number | null;
  /** p ≤ 0.025, one-sided. */
  fasterThanNearestNeighbour: boolean;
  sentence: string;
  warnings: string[];
}
