import { countBits, wordsPerSite, type PackedSpins } from "@/lib/science/correlators/packed-spins";
import { pairCount } from "@/lib/science/correlators/pairs";
import type { ReadoutCorrection } from "@/lib/science/correlators/readout-correction";

/** `unbiased` multiplies the plug-in estimate by M / (M − 1). */
export type CorrelatorEstimator = "plug-in" | "unbiased";

/** In how many of the shots each site, and both sites of each pair, read up. */
export interface UpCounts {
  shots: number;
  /** `[site]` */
  up: Uint32Array;
  /** `[pair]` */
  bothUp: Uint32Array;
}

/** An outcome expected in fewer shots than this leaves a pair's interval without cover. */
export const FEWEST_FLIPS = 5;

/** Returns the up counts of all sites and pairs. */
export function countUps(spins: PackedSpins): UpCounts {
  const stride = wordsPerSite(spins.shots);
  const up = new Uint32Array(spins.sites);
  const bothUp = new Uint32Array(pairCount(spins.sites));
  let pair = 0;
  for (let i = 0; i < spins.sites; i++) {
    up[i] = countCommonBits(spins.words, i * stride, i * stride, stride);
    for (let j = i + 1; j < spins.sites; j++) {
      bothUp[pair++] = countCommonBits(spins.words, i * stride, j * stride, stride);
    }
  }
  return { shots: spins.shots, up, bothUp };
}

function countCommonBits(words: Uint32Array, first: number, second: number, length: number): number {
  let count = 0;
  for (let w = 0; w < length; w++) count += countBits(words[first + w] & words[second + w]);
  return count;
}

/** Returns the shots of a pair's joint outcomes `[++, +−, −+, −−]`. */
export function jointOutcomes(counts: UpCounts, i: number, j: number, pair: number): [number, number, number, number] {
  const both = counts.bothUp[pair];
  const onlyI = counts.up[i] - both;
  const onlyJ = counts.up[j] - both;
  return [both, onlyI, onlyJ, counts.shots - both - onlyI - onlyJ];
}

/** Tells whether any joint outcome, by its observed share, is expected in fewer than 5 shots of a resample. */
export function hasFewFlips(outcomes: readonly number[]): boolean {
  return outcomes.some((shots) => shots < FEWEST_FLIPS);
}

/**
 * Returns ⟨σ_i⟩ `[site]`, corrected for readout when a correction is given; NaN without shots.
 */
export function meanSpins(counts: UpCounts, readout: ReadoutCorrection | null): Float64Array {
  return Float64Array.from(counts.up, (up, i) => {
    const read = (2 * up) / counts.shots - 1;
    return readout === null ? read : (read - readout.offset[i]) * readout.inverseFactor[i];
  });
}

/**
 * Returns what (M n_++ − n_i n_j) is multiplied by to give C = ⟨σ_i σ_j⟩ − ⟨σ_i⟩⟨σ_j⟩: 4 / M², or 4 / (M (M − 1)).
 */
export function correlatorScale(shots: number, estimator: CorrelatorEstimator): number {
  return 4 / (shots * (estimator === "unbiased" ? shots - 1 : shots));
}

/**
 * Returns C_ij of every pair, `[pair]`, corrected for readout when a correction is given. Exactly 0 when a site never
 * flips; NaN without shots, and for `unbiased` with one.
 */
export function connectedCorrelators(
  counts: UpCounts,
  estimator: CorrelatorEstimator,
  readout: ReadoutCorrection | null,
): Float64Array {
  const sites = counts.up.length;
  const scale = correlatorScale(counts.shots, estimator);
  const value = new Float64Array(counts.bothUp.length);
  let pair = 0;
  for (let i = 0; i < sites; i++) {
    for (let j = i + 1; j < sites; j++) {
      const bracket = counts.shots * counts.bothUp[pair] - counts.up[i] * counts.up[j];
      const factors = readout === null ? 1 : readout.inverseFactor[i] * readout.inverseFactor[j];
      value[pair++] = scale * bracket * factors;
    }
  }
  return value;
}

/** Returns the variances C_ii = 1 − ⟨σ_i⟩², `[site]`, of means from `meanSpins`; never drawn as correlations. */
export function spinVariances(mean: Float64Array): Float64Array {
  return mean.map((m) => 1 - m * m);
}
