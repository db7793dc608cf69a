import type { SitePositions } from "@/lib/science/correlators/trace-plan";
import type { FrontPoint } from "@/lib/science/front/front-result";
import type { SimulatedAnalysis } from "@/lib/science/studies/simulated-run";
import type { NearestNeighbourModel } from "@/lib/science/theory/nearest-neighbour";

/** What the null front of an analysis is made of. */
export interface NullFrontInput extends SimulatedAnalysis {
  model: NearestNeighbourModel;
  /** Only a chain (y null) has a null front. */
  positions: SitePositions;
  /** The run's largest coupling J/2π; null when unknown, and J is then matched to the observed points. */
  jMax_hz: number | null;
  /** The points of the studied analysis. */
  observedPoints: readonly FrontPoint[];
}
