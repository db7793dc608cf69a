import type { BrightIs } from "@/lib/science/correlators/packed-spins";
import { factorMoments as momentsOf, type FactorMoments } from "@/lib/science/correlators/bootstrap-law";
import { createRandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { drawBeta } from "@/lib/science/stats/random-variates";

/** A site whose F is at or below this is refused: dividing by it would turn noise into a result. */
export const LEAST_READOUT_FACTOR = 0.2;

/**
 * Independent readout errors undone: ⟨σ_i⟩ = (⟨σ_i⟩_read − offset_i) · inverseFactor_i and
 * C_ij = C_ij,read · inverseFactor_i · inverseFactor_j (Shen and Duan 2012), with F_i = 1 − ε_d,i − ε_b,i.
 */
export interface ReadoutCorrection {
  /** `[site]`, 1 / F_i */
  inverseFactor: Float64Array;
  /** `[site]`, ±(ε_d,i − ε_b,i), + when bright is up. */
  offset: Float64Array;
  /** The same for every bootstrap replicate, `[site][replicate]`; null when the ε's are taken as exact. */
  replicates: ReadoutReplicates | null;
}

export interface ReadoutReplicates {
  /** `[site][replicate]` */
  inverseFactor: Float64Array;
  /** `[site][replicate]` */
  offset: Float64Array;
  /** `[site]`, of inverseFactor over the replicates. */
  factorMoments: FactorMoments[];
}

/** What a detection says of its readout errors, every array `[site]`. */
export interface ReadoutErrors {
  /** ε_d = P(reads bright | dark) */
  falseBright: Float64Array;
  /** ε_b = P(reads dark | bright) */
  falseDark: Float64Array;
}

/** The evidence behind the ε's, every array `[site]`: x wrong readings of K shots, whole or effective numbers. */
export interface ReadoutEvidence {
  falseBrightShots: Float64Array;
  darkShots: Float64Array;
  falseDarkShots: Float64Array;
  brightShots: Float64Array;
}

/** Returns F_i = 1 − ε_d,i − ε_b,i, `[site]`. */
export function readoutFactors(errors: ReadoutErrors): Float64Array {
  return errors.falseBright.map((falseBright, i) => 1 - falseBright - errors.falseDark[i]);
}

/** Returns the sites that cannot be corrected, F_i ≤ 0.2 (or not a number), in site order. */
export function sitesBeyondCorrection(errors: ReadoutErrors): number[] {
  const refused: number[] = [];
  readoutFactors(errors).forEach((factor, i) => {
    if (!(factor > LEAST_READOUT_FACTOR)) refused.push(i);
  });
  return refused;
}

/**
 * Returns the correction with the ε's taken as exact. Throws RangeError for a site that `sitesBeyondCorrection` lists:
 * ask it first.
 */
export function exactReadoutCorrection(errors: ReadoutErrors, brightIs: BrightIs): ReadoutCorrection {
  const refused = sitesBeyondCorrection(errors);
  if (refused.length > 0) throw new RangeError(`F is not above ${LEAST_READOUT_FACTOR} at sites ${refused.join(", ")}`);
  const sign = brightIs === "up" ? 1 : -1;
  return {
    inverseFactor: readoutFactors(errors).map((factor) => 1 / factor),
    offset: errors.falseBright.map((falseBright, i) => sign * (falseBright - errors.falseDark[i])),
    replicates: null,
  };
}

/**
 * Returns the corrections of `replicateCount` bootstrap replicates: each draws a site's ε_d and ε_b from
 * Beta(x + ½, K − x + ½), once for all evolution times. Keyed by (seed, site, replicate).
 */
export function drawReadoutReplicates(
  evidence: ReadoutEvidence,
  brightIs: BrightIs,
  seed: number,
  replicateCount: number,
): ReadoutReplicates {
  const sites = evidence.darkShots.length;
  const sign = brightIs === "up" ? 1 : -1;
  const inverseFactor = new Float64Array(sites * replicateCount);
  const offset = new Float64Array(sites * replicateCount);
  for (let i = 0; i < sites; i++) {
    for (let b = 0; b < replicateCount; b++) {
      const stream = createRandomStream(seed, RANDOM_PURPOSES.readoutErrors, i, b);
      const falseBright = drawRate(evidence.falseBrightShots[i], evidence.darkShots[i], stream);
      const falseDark = drawRate(evidence.falseDarkShots[i], evidence.brightShots[i], stream);
      inverseFactor[i * replicateCount + b] = 1 / (1 - falseBright - falseDark);
      offset[i * replicateCount + b] = sign * (falseBright - falseDark);
    }
  }
  const factorMoments = Array.from({ length: sites }, (_, i) => {
    return momentsOf(inverseFactor.subarray(i * replicateCount, (i + 1) * replicateCount));
  });
  return { inverseFactor, offset, factorMoments };
}

/**
 * Returns the sites, in order, whose F is so poorly known that a replicate's is at most half the least F: a few such replicates would
 * make up the whole error bar.
 */
export function sitesPoorlyKnown({ inverseFactor, factorMoments: { length: sites } }: ReadoutReplicates): number[] {
  const replicates = inverseFactor.length / sites;
  const isSound = (inverse: number) => inverse > 0 && inverse < 2 / LEAST_READOUT_FACTOR;
  return Array.from({ length: sites }, (_, i) => i).filter((i) => !inverseFactor.subarray(i * replicates, (i + 1) * replicates).every(isSound));
}

function drawRate(wrong: number, shots: number, stream: ReturnType<typeof createRandomStream>): number {
  return drawBeta(stream, wrong + 0.5, shots - wrong + 0.5);
}
