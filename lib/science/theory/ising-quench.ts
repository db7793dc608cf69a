/**
 * Exact quench under H = Σ_{i<j} J_ij σx_i σx_j from all spins down along z (Emch 1966, Radin 1970, Foss-Feig et al. 2013).
 * Couplings are angular (rad per unit of `time`), `[i][j]`.
 */

/** Returns ⟨σz_i⟩ = −Π_{k≠i} cos(2 J_ik t). */
export function isingMean(couplings: Float64Array, sites: number, i: number, time: number): number {
  let product = -1;
  for (let k = 0; k < sites; k++) {
    if (k !== i) product *= Math.cos(2 * couplings[i * sites + k] * time);
  }
  return product;
}

/** Returns the connected correlator ⟨σz_i σz_j⟩ − ⟨σz_i⟩⟨σz_j⟩ for i ≠ j. */
export function isingCorrelator(couplings: Float64Array, sites: number, i: number, j: number, time: number): number {
  let difference = 0.5;
  let sum = 0.5;
  for (let k = 0; k < sites; k++) {
    if (k === i || k === j) continue;
    const atI = couplings[i * sites + k];
    const atJ = couplings[j * sites + k];
    difference *= Math.cos(2 * (atI - atJ) * time);
    sum *= Math.cos(2 * (atI + atJ) * time);
  }
  return difference + sum - isingMean(couplings, sites, i, time) * isingMean(couplings, sites, j, time);
}
