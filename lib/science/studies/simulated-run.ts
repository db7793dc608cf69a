import type { IntervalKind } from "@/lib/science/correlators/error-bars";
import type { CorrelatorEstimator } from "@/lib/science/correlators/connected-correlators";
import type { BrightIs } from "@/lib/science/correlators/packed-spins";
import type { ReadoutErrors } from "@/lib/science/correlators/readout-correction";
import type { TracePlan } from "@/lib/science/correlators/trace-plan";
import type { FrontFitOptions, FrontRule } from "@/lib/science/front/front-rule";

/** How a simulated run is read and analysed: everything as in the analysis that is studied. */
export interface SimulatedAnalysis {
  /** `[k]`, µs, strictly increasing. */
  times_us: Float64Array;
  /** `[k]`, kept shots M_k, whole. */
  shotsPerTime: Float64Array;
  /** The flips that readout makes, `[site]`; null for none. */
  readoutErrors: ReadoutErrors | null;
  /** Whether the analysis undoes them. */
  readoutCorrected: boolean;
  brightIs: BrightIs;
  estimator: CorrelatorEstimator;
  interval: IntervalKind;
  traces: TracePlan;
  rule: FrontRule;
  options: FrontFitOptions;
  /** Bootstrap replicates of one repeat, from 2; more than 200 are taken as 200. */
  replicates: number;
  seed: number;
}
