import { factorMoments } from "@/lib/science/correlators/bootstrap-law";
import type { BrightIs } from "@/lib/science/correlators/packed-spins";
import type { ReadoutReplicates } from "@/lib/science/correlators/readout-correction";
import { createRandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { drawNormal } from "@/lib/science/stats/random-variates";
import type { CountLaw } from "@/lib/science/threshold-free/count-laws";

/** How well a site's laws of counts are known: standard errors of its soft spin's mean over each component. */
export interface SoftMeanErrors {
  dark: number;
  bright: number;
}

/**
 * Returns these errors for fitted Poisson rates with standard errors, by the delta method: d/dλ Σ p(n; λ) f(n) = Σ p(n; λ) (f(n + 1) − f(n)).
 */
export function poissonMeanErrors(law: CountLaw, value: Float64Array, darkError: number, brightError: number): SoftMeanErrors {
  const slope = (shares: Float64Array) => shares.reduce((sum, share, n) => (n + 1 < value.length ? sum + share * (value[n + 1] - value[n]) : sum), 0);
  return { dark: Math.abs(slope(law.dark)) * darkError, bright: Math.abs(slope(law.bright)) * brightError };
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
