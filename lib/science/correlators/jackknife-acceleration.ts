import type { PackedSpins } from "@/lib/science/correlators/packed-spins";
import { wordsPerSite } from "@/lib/science/correlators/packed-spins";

/**
 * Accelerations of BCa intervals, Σd³ / (6 (Σd²)^{3/2}) with d = mean − θ₍ₛ₎ over estimates that leave out one shot
 * each (Efron and Tibshirani 1993, ch. 14). For a covariance, θ₍ₛ₎ = M/(M−1) · (C − δ_i δ_j/(M−1)) exactly, with
 * δ = σ − ⟨σ⟩ of shot s, so d is proportional to δ_i δ_j − C; factors do not matter.
 */

/**
 * Returns the acceleration of one pair's C from its joint outcomes `[++, +−, −+, −−]`; 0 when a site never flips.
 */
export function pairAcceleration(outcomes: readonly [number, number, number, number]): number {
  const shots = outcomes[0] + outcomes[1] + outcomes[2] + outcomes[3];
  const meanI = (outcomes[0] + outcomes[1] - outcomes[2] - outcomes[3]) / shots;
  const meanJ = (outcomes[0] - outcomes[1] + outcomes[2] - outcomes[3]) / shots;
  const products = [
    (1 - meanI) * (1 - meanJ),
    (1 - meanI) * (-1 - meanJ),
    (-1 - meanI) * (1 - meanJ),
    (-1 - meanI) * (-1 - meanJ),
  ];
  return acceleration(products, outcomes);
}

/** Returns the acceleration of Σ weight_p C_p over pairs `[pair][2]` of sites; the weights also hold the 1/(F_i F_j). */
export function sumAcceleration(
  spins: PackedSpins,
  mean: Float64Array,
  sitesOfPairs: ArrayLike<number>,
  weights: ArrayLike<number>,
): number {
  const products = new Float64Array(spins.shots);
  const stride = wordsPerSite(spins.shots);
  for (let p = 0; p < weights.length; p++) {
    const i = sitesOfPairs[2 * p];
    const j = sitesOfPairs[2 * p + 1];
    for (let s = 0; s < spins.shots; s++) {
      const word = s >>> 5;
      const up = (spins.words[i * stride + word] >>> (s & 31)) & 1;
      const otherUp = (spins.words[j * stride + word] >>> (s & 31)) & 1;
      products[s] += weights[p] * (2 * up - 1 - mean[i]) * (2 * otherUp - 1 - mean[j]);
    }
  }
  return acceleration(products, null);
}

function acceleration(products: ArrayLike<number>, counts: readonly number[] | null): number {
  let total = 0;
  let sum = 0;
  for (let n = 0; n < products.length; n++) {
    const count = counts === null ? 1 : counts[n];
    total += count;
    sum += count * products[n];
  }
  let squares = 0;
  let cubes = 0;
  for (let n = 0; n < products.length; n++) {
    const d = products[n] - sum / total;
    const count = counts === null ? 1 : counts[n];
    squares += count * d * d;
    cubes += count * d * d * d;
  }
  return squares === 0 ? 0 : cubes / (6 * squares ** 1.5);
}
