import type { BrightIs } from "@/lib/science/correlators/packed-spins";
import type { CountLaw } from "@/lib/science/threshold-free/count-laws";
import { softWeights } from "@/lib/science/threshold-free/soft-weights";

/** How a run's counts are read without thresholds. */
export interface SoftReading {
  kind: "soft-reading";
  /** `[site][bin]`, for `softenCounts`. */
  weights: Float64Array[];
  /** `[site]`, see `SoftWeights`. */
  retained: Float64Array;
}

/** Why a run cannot be read without thresholds. */
export interface SoftRefusal {
  kind: "refused";
  /** In site order. */
  sites: number[];
  message: string;
}

/** Returns the weights of all sites, or which sites have none: those without a law of counts and those whose components nearly coincide. */
export function readSoftly(laws: readonly (CountLaw | null)[], brightIs: BrightIs): SoftReading | SoftRefusal {
  const found = laws.map((law) => (law === null ? null : softWeights(law, brightIs)));
  const refused = Array.from(found.keys()).filter((site) => found[site] === null);
  if (refused.length > 0) {
    const message = `Without thresholds every site needs two fitted components that can be told apart; sites ${refused.join(", ")} have none.`;
    return { kind: "refused", sites: refused, message };
  }
  const usable = found.filter((weights) => weights !== null);
  return { kind: "soft-reading", weights: usable.map(({ value }) => value), retained: Float64Array.from(usable, ({ retained }) => retained) };
}
