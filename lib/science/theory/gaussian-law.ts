import { pairCount } from "@/lib/science/correlators/pairs";
import { choleskyFactor } from "@/lib/science/stats/cholesky";
import { symmetricEigen } from "@/lib/science/stats/symmetric-eigen";
import { correlatorOfLatent, latentOfCorrelator, latentThreshold } from "@/lib/science/theory/latent-correlation";
import type { GaussianLaw, SpinMoments } from "@/lib/science/theory/spin-law";

/** A surrogate with what it gives. */
export interface GaussianSurrogate {
  law: GaussianLaw;
  /** `[pair]`, the correlators of the law itself. */
  correlator: Float64Array;
  /** Largest difference from the correlators that were asked. */
  largestChange: number;
}

/** Least eigenvalue of the latent correlations after repair. */
const LEAST_EIGENVALUE = 1e-6;

/**
 * Returns the law of ±1 spins with given means and, where such spins exist, given pair correlators: signs of normal
 * variables against thresholds (Emrich and Piedmonte 1991). Correlations of three and more spins are those of the normal
 * variables, not of any quantum state. Latent correlations that are not positive definite are moved to
 * the nearest by clipping eigenvalues (Rebonato and Jäckel 1999).
 */
export function gaussianLawOf({ mean, correlator }: SpinMoments): GaussianSurrogate {
  const sites = mean.length;
  const threshold = Float64Array.from(mean, latentThreshold);
  const latent = latentMatrix(sites, (pair, i, j) => latentOfCorrelator(correlator[pair], threshold[i], threshold[j]));
  let factor = choleskyFactor(latent, sites);
  if (factor === null) {
    clipEigenvalues(latent, sites);
    factor = choleskyFactor(latent, sites);
  }
  if (factor === null) throw new RangeError("the repaired latent correlations are not positive definite");
  const achieved = new Float64Array(pairCount(sites));
  let largestChange = 0;
  let pair = 0;
  for (let i = 0; i < sites; i++) {
    for (let j = i + 1; j < sites; j++, pair++) {
      achieved[pair] = correlatorOfLatent(latent[i * sites + j], threshold[i], threshold[j]);
      largestChange = Math.max(largestChange, Math.abs(achieved[pair] - correlator[pair]));
    }
  }
  return { law: { kind: "gaussian", sites, factor, threshold }, correlator: achieved, largestChange };
}

function latentMatrix(sites: number, element: (pair: number, i: number, j: number) => number): Float64Array {
  const latent = new Float64Array(sites * sites);
  let pair = 0;
  for (let i = 0; i < sites; i++) {
    latent[i * sites + i] = 1;
    for (let j = i + 1; j < sites; j++) latent[i * sites + j] = latent[j * sites + i] = element(pair++, i, j);
  }
  return latent;
}

/** Raises small eigenvalues and brings the diagonal back to 1; `latent` is mutated. */
function clipEigenvalues(latent: Float64Array, sites: number): void {
  const { values, vectors } = symmetricEigen(latent, sites);
  const roots = values.map((value) => Math.sqrt(Math.max(value, LEAST_EIGENVALUE)));
  const rows = vectors.map((value, at) => value * roots[at % sites]);
  for (let i = 0; i < sites; i++) {
    const row = rows.subarray(i * sites, (i + 1) * sites);
    const norm = Math.sqrt(row.reduce((sum, value) => sum + value * value, 0));
    row.forEach((value, m) => (row[m] = value / norm));
  }
  for (let i = 0; i < sites; i++) {
    for (let j = 0; j < i; j++) {
      let sum = 0;
      for (let m = 0; m < sites; m++) sum += rows[i * sites + m] * rows[j * sites + m];
      latent[i * sites + j] = latent[j * sites + i] = sum;
    }
    latent[i * sites + i] = 1;
  }
}
