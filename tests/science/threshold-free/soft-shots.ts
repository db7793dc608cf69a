import { createRandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { drawPoisson } from "@/lib/science/stats/random-variates";
import { poissonCountLaw, type FittedComponents } from "@/lib/science/threshold-free/count-laws";
import { softenCounts, type SoftSpins } from "@/lib/science/threshold-free/soft-spins";
import { softWeights } from "@/lib/science/threshold-free/soft-weights";

/** Two components that overlap: the best threshold misreads 7.2 % of the shots on average. */
export const OVERLAPPING: FittedComponents = { dark: 2, bright: 8, brightWeight: 0.5 };

/** The soft spins of counts `[shot][site]` that show spins `[s][site]` of ±1, bright up. */
export function softShots(spins: number[][], components: FittedComponents, seed: number): SoftSpins {
  const stream = createRandomStream(seed, RANDOM_PURPOSES.simulation, 7);
  const counts = Uint16Array.from(spins.flat(), (spin) => drawPoisson(stream, spin === 1 ? components.bright : components.dark));
  const weights = softWeights(poissonCountLaw(components), "up");
  if (weights === null) throw new Error("the components cannot be told apart");
  const sites = spins[0].length;
  return softenCounts(counts, spins.length, sites, Array.from({ length: sites }, () => weights.value));
}
