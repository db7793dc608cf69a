import type { ChoiceName, SweepChoices } from "@/lib/science/studies/sweep-choices";

export interface SweptNumber {
  value: number;
  /** Standard error by the sweep's own closed form. */
  error: number;
}

/** What one combination of choices gives; numbers null without a fit, with the reason. */
export interface SweepCombination {
  choices: SweepChoices;
  gamma: SweptNumber | null;
  beta: SweptNumber | null;
  v_sites_per_ms: SweptNumber | null;
  /** Points that entered the fits. */
  points: number;
  reason: string | null;
}

/** How much hangs on one choice: it alone is varied, all others are as in the analysis. */
export interface SweptChoice {
  name: ChoiceName;
  alternatives: number;
  /** Alternatives without a fit. */
  withoutFit: number;
  /** Over the saved choice and its alternatives; null without a fit. */
  leastBeta: number | null;
  mostBeta: number | null;
  /** Largest |γ − γ of the baseline| over the analysis' own error of γ; null without them. */
  shift: number | null;
}

/** The sensitivity sweep of one analysis, ready for JSON. */
export interface SweepResult {
  /** The analysis' own choices, with the same error rule as every other combination. */
  baseline: SweepCombination;
  /** γ of the analysis with its bootstrap error; null without a fit. */
  saved: SweptNumber | null;
  /** The baseline first. */
  combinations: SweepCombination[];
  /** Those with alternatives, by what hangs on them, most first. */
  choices: SweptChoice[];
  withoutFit: number;
  /** 2.5 and 97.5 % quantiles of β over the combinations with a fit; null without any. */
  middle: { low: number; high: number } | null;
  /** Combinations whose γ lies more than 1.96 of its errors below 1, and above. */
  fasterThanLinear: number;
  slowerThanLinear: number;
  sentence: string;
  notes: string[];
}
