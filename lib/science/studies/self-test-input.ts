import type { SitePositions } from "@/lib/science/correlators/trace-plan";
import type { FrontResult } from "@/lib/science/front/front-result";
import type { TraceSet } from "@/lib/science/front/trace-set";
import type { SimulatedAnalysis } from "@/lib/science/studies/simulated-run";

/** What the truth of a self-test is built from. */
export interface SelfTestInput extends SimulatedAnalysis {
  positions: SitePositions;
  /** `[k][site]`, the analysis' own ⟨σ_i⟩. */
  means: Float64Array;
  /** The analysis' own traces; their replicates are not used, and may be empty with `replicateCount` 0. */
  observedTraces: TraceSet;
  /** The analysis' own front: its power law and the traces it fitted. */
  observedFront: FrontResult;
}
