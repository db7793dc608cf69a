/** An estimate of one simulated repeat with its 95 % interval; null where the analysis gives no number. */
export interface IntervalEstimate {
  value: number | null;
  error: number | null;
  low: number | null;
  high: number | null;
}

/** What the analysis says of one simulated run whose truth is known. */
export interface SelfTestRepeat {
  gamma: IntervalEstimate;
  v_sites_per_ms: IntervalEstimate;
  /** `[trace]`, µs. Null for a trace that entered no fit. */
  tau_us: (IntervalEstimate | null)[];
  verdict: string;
}

/** How often 95 % intervals hold the truth, with the Clopper–Pearson 95 % limits of that share. */
export interface Coverage {
  /** Intervals that hold the truth, of `of`. */
  held: number;
  of: number;
  /** Null when `of` is 0. */
  share: number | null;
  low: number | null;
  high: number | null;
}

/** Bias and coverage of one parameter over the repeats that carry it. */
export interface ParameterTest {
  truth: number | null;
  /** Mean estimate minus truth. */
  bias: number | null;
  /** Bias as a share of the mean reported standard error. */
  biasInErrors: number | null;
  /** Standard deviation of the estimates over repeats (n − 1). */
  scatter: number | null;
  /** Mean reported standard error. */
  meanError: number | null;
  coverage: Coverage;
}

/** The same for one crossing time. */
export interface CrossingTest extends ParameterTest {
  label: string;
  distance: number;
}

/** The self-test of one analysis, ready for JSON. */
export interface SelfTestResult {
  repeats: number;
  /** Repeats without a power-law fit. */
  failedFits: number;
  failedShare: number | null;
  /** The truth's power law and line, read by the same extractor from the noise-free traces. */
  gamma: ParameterTest;
  v_sites_per_ms: ParameterTest;
  /** The traces that the run's own analysis fitted. */
  crossings: CrossingTest[];
  /** Coverage of all their crossing times together; its limits take intervals of one repeat as independent. */
  crossingCoverage: Coverage;
  /** How far the simulated truth departs from what was asked. */
  truth: SelfTestTruth;
  sentence: string;
  warnings: string[];
}

export interface SelfTestTruth {
  /** γ of the run's fit, from which the truth was built. */
  fittedGamma: number;
  /** Largest change of any pair correlation that made it a correlation of ±1 variables with these means. */
  largestChange: number;
  /** Evolution times whose correlations had to be changed by more than 0.001. */
  timesChanged: number;
}
