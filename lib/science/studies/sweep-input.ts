import type { CorrelatorEstimator } from "@/lib/science/correlators/connected-correlators";
import type { BrightIs } from "@/lib/science/correlators/packed-spins";
import type { ReadoutErrors } from "@/lib/science/correlators/readout-correction";
import type { SitePositions, TracePlan } from "@/lib/science/correlators/trace-plan";
import type { FrontFitOptions, FrontRule } from "@/lib/science/front/front-rule";
import type { SweptTraces } from "@/lib/science/studies/sweep-choices";
import type { SweptNumber } from "@/lib/science/studies/sweep-result";

/** The analysis that is swept. */
export interface SweepInput {
  /** `[k]`, µs, strictly increasing. */
  times_us: Float64Array;
  positions: SitePositions;
  brightIs: BrightIs;
  estimator: CorrelatorEstimator;
  rule: FrontRule;
  options: FrontFitOptions;
  traces: SweptTraces;
  readoutCorrected: boolean;
  /** `[shift]`, with 0 among them. */
  thresholdShifts: readonly number[];
  /** `[shift]`, the ε's of the shifted thresholds; null where they are unknown or beyond correction. */
  readoutErrors: readonly (ReadoutErrors | null)[];
  /** The distance averages, over all pairs or those of the analysis' bulk. */
  distancePlan: TracePlan;
  /** γ of the analysis with its bootstrap error; null without a fit. */
  savedGamma: SweptNumber | null;
}
