import type { BrightIs } from "@/lib/science/correlators/packed-spins";
import { poissonCountLaw, type CountLaw, type FittedComponents } from "@/lib/science/threshold-free/count-laws";
import { poissonMeanErrors, type SoftMeanErrors } from "@/lib/science/threshold-free/law-replicates";
import { softWeights } from "@/lib/science/threshold-free/soft-weights";

/** A fitted law of a site's counts, of any kind. */
export interface CountModel {
  law: CountLaw;
  /** How well it is known, for soft spins `value`, `[bin]`. */
  meanErrors: (value: Float64Array) => SoftMeanErrors;
}

/** How a run's counts are read without thresholds. */
export interface SoftReading {
  kind: "soft-reading";
  /** `[site][bin]`, for `softenCounts`. */
  weights: Float64Array[];
  /** `[site]`, see `SoftWeights`. */
  retained: Float64Array;
  /** `[site]` */
  laws: CountLaw[];
  /** `[site]`, for `drawLawReplicates`. */
  meanErrors: SoftMeanErrors[];
}

/** Why a run cannot be read without thresholds. */
export interface SoftRefusal {
  kind: "refused";
  /** In site order. */
  sites: number[];
  message: string;
}

/** Returns the model of two fitted Poisson components; null where there are none, as in a detection without a usable mixture. */
export function poissonCountModel(mixture: (FittedComponents & { darkError: number; brightError: number }) | null): CountModel | null {
  if (mixture === null) return null;
  const law = poissonCountLaw(mixture);
  return { law, meanErrors: (value) => poissonMeanErrors(law, value, mixture.darkError, mixture.brightError) };
}

/** Returns the weights of all sites, or which sites have none: those without a model and those whose components nearly coincide. */
export function readSoftly(models: readonly (CountModel | null)[], brightIs: BrightIs): SoftReading | SoftRefusal {
  const reading: SoftReading = { kind: "soft-reading", weights: [], retained: new Float64Array(models.length), laws: [], meanErrors: [] };
  const refused: number[] = [];
  models.forEach((model, site) => {
    const weights = model === null ? null : softWeights(model.law, brightIs);
    if (model === null || weights === null) {
      refused.push(site);
      return;
    }
    reading.weights.push(weights.value);
    reading.retained[site] = weights.retained;
    reading.laws.push(model.law);
    reading.meanErrors.push(model.meanErrors(weights.value));
  });
  if (refused.length === 0) return reading;
  const message = `Without thresholds every site needs two fitted components that can be told apart; sites ${refused.join(", ")} have none.`;
  return { kind: "refused", sites: refused, message };
}
