/** How the level of a trace is set: a share of its largest signal, one level for all, or a multiple of its noise. */
export type LevelRule = "fraction-of-max" | "fixed-level" | "noise-multiple";

/**
 * How a crossing is read off: centred isotonic regression before the maximum, the first samples at the level, or the last upward crossing
 * of the level before the maximum.
 */
export type CrossingMethod = "isotonic" | "first" | "last-upcrossing";

/** The definition of the front, recorded with every analysis. */
export interface FrontRule {
  rule: LevelRule;
  /**
   * `fraction-of-max`: the share f of the largest signal (0 < f < 1). `fixed-level`: the correlation itself.
   * `noise-multiple`: the multiple of the trace's noise, the median standard error of its samples up to the maximum.
   */
  level: number;
  method: CrossingMethod;
  /** Samples in a row that must reach the level; used by `first` only. Whole, from 1. */
  hold: number;
  /** The least ratio g of largest signal to its standard error that makes a trace resolved. */
  minSignal: number;
  /** Take |C| instead of the signal oriented by the sign of its largest value; noise then no longer averages to zero. */
  absolute: boolean;
}

export const DEFAULT_FRONT_RULE: Readonly<FrontRule> = {
  rule: "fraction-of-max",
  level: 0.1,
  method: "isotonic",
  hold: 2,
  minSignal: 5,
  absolute: false,
};

/** Choices of the fits that do not change the crossing times. */
export interface FrontFitOptions {
  /** Straight line through the origin, τ = d/v, instead of with a free offset t₀. */
  throughOrigin: boolean;
  /** Least squares of the power law in ln τ (`log-time`), or in τ itself (`time`). */
  powerLawIn: "log-time" | "time";
  /** Weights of the fits: each point's own error, or the joint bootstrap covariance of all crossing times (generalised least squares). */
  covariance: "diagonal" | "bootstrap";
}

export const DEFAULT_FRONT_FIT_OPTIONS: Readonly<FrontFitOptions> = { throughOrigin: false, powerLawIn: "log-time", covariance: "diagonal" };
