import type { BrightIs } from "@/lib/science/correlators/packed-spins";
import { listPairs, pairCount } from "@/lib/science/correlators/pairs";
import type { CountLaw } from "@/lib/science/threshold-free/count-laws";
import { fitPairOutcomes } from "@/lib/science/threshold-free/pair-likelihood";
import { tallyPair } from "@/lib/science/threshold-free/pair-tally";

/** Maximum-likelihood correlators of one evolution time. */
export interface MostLikelyCorrelators {
  /** `[pair]` */
  value: Float64Array;
  /** `[pair]`, standard error from the observed information; NaN where that is singular. */
  error: Float64Array;
  /** `[pair]`, 1 where the iteration ended at its limit. */
  unfinished: Uint8Array;
}

/** Returns every pair's C from whole counts `[shot][site]` under laws `[site]`; see `fitPairOutcomes`. NaN without shots. */
export function mostLikelyCorrelators(counts: Uint16Array, laws: readonly CountLaw[], brightIs: BrightIs): MostLikelyCorrelators {
  const sites = laws.length;
  const pairs = listPairs(sites);
  const found = { value: new Float64Array(pairCount(sites)), error: new Float64Array(pairCount(sites)), unfinished: new Uint8Array(pairCount(sites)) };
  for (let pair = 0; pair < found.value.length; pair++) {
    const i = pairs[2 * pair];
    const j = pairs[2 * pair + 1];
    const tally = tallyPair(counts, sites, i, j, laws[i].dark.length, laws[j].dark.length);
    const { correlator, error, converged } = fitPairOutcomes(tally, laws[i], laws[j], brightIs);
    found.value[pair] = correlator;
    found.error[pair] = error;
    found.unfinished[pair] = converged ? 0 : 1;
  }
  return found;
}
