import { factorMoments } from "@/lib/science/correlators/bootstrap-law";
import type { BrightIs } from "@/lib/science/correlators/packed-spins";
import type { ReadoutReplicates } from "@/lib/science/correlators/readout-correction";
import { createRandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { drawNormal } from "@/lib/science/stats/random-variates";
import { fittedCountLaw, type FittedComponents } from "@/lib/science/threshold-free/count-laws";

/** How well a site's laws of counts are known: standard errors of its soft spin's mean over each component. */
export interface SoftMeanErrors {
  dark: number;
  bright: number;
}

/** Steps of the slopes, relative to the rates. */
const STEP = 1e-4;

/**
 * Returns these errors for fitted components whose two rates have standard errors, by the delta method with central differences. What else a
 * model has (leaks, excess variances) counts as known.
 */
export function fittedMeanErrors(components: FittedComponents, value: Float64Array, darkError: number, brightError: number): SoftMeanErrors {
  const means = (change: Partial<FittedComponents>) => {
    const law = fittedCountLaw({ ...components, ...change });
    return { dark: meanOver(law.dark, value), bright: meanOver(law.bright, value) };
  };
  const shifts = (rate: "dark" | "bright", error: number) => {
    const step = STEP * components[rate];
    if (step === 0) return { dark: 0, bright: 0 };
    const above = means({ [rate]: components[rate] + step });
    const below = means({ [rate]: components[rate] - step });
    return { dark: ((above.dark - below.dark) / (2 * step)) * error, bright: ((above.bright - below.bright) / (2 * step)) * error };
  };
  const byDark = shifts("dark", darkError);
  const byBright = shifts("bright", brightError);
  return { dark: Math.hypot(byDark.dark, byBright.dark), bright: Math.hypot(byDark.bright, byBright.bright) };
}

/** A law with a few bins more or less than there are soft spins has its tail in the last of them. */
function meanOver(shares: Float64Array, value: Float64Array): number {
  const last = value.length - 1;
  return shares.reduce((sum, share, n) => sum + share * value[Math.min(n, last)], 0);
}

/**
 * Returns what the uncertain laws of counts make of each replicate's soft spins, σ = (σ̂ − offset) · inverseFactor: the means over the dark
 * and the bright component are drawn from normal laws around −1 and +1, independently, once for all evolution times. Keyed by
 * (seed, site, replicate). `errors` is `[site]`.
 */
export function drawLawReplicates(errors: readonly SoftMeanErrors[], brightIs: BrightIs, seed: number, replicateCount: number): ReadoutReplicates {
  const sign = brightIs === "up" ? 1 : -1;
  const inverseFactor = new Float64Array(errors.length * replicateCount);
  const offset = new Float64Array(errors.length * replicateCount);
  errors.forEach(({ dark, bright }, i) => {
    for (let b = 0, at = i * replicateCount; b < replicateCount; b++, at++) {
      const stream = createRandomStream(seed, RANDOM_PURPOSES.readoutErrors, i, b);
      const darkMean = dark * drawNormal(stream) - sign;
      const brightMean = bright * drawNormal(stream) + sign;
      inverseFactor[at] = (2 * sign) / (brightMean - darkMean);
      offset[at] = (brightMean + darkMean) / 2;
    }
  });
  const moments = errors.map((_, i) => factorMoments(inverseFactor.subarray(i * replicateCount, (i + 1) * replicateCount)));
  return { inverseFactor, offset, factorMoments: moments };
}
