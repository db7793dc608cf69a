/** Returns J_ij = J0 |i − j|^−α, `[i][j]` in C order, zero on the diagonal; the unit is that of J0. */
export function powerLawCouplings(sites: number, alpha: number, j0: number): Float64Array {
  const couplings = new Float64Array(sites * sites);
  for (let i = 0; i < sites; i++) {
    for (let j = 0; j < sites; j++) {
      const distance = Math.abs(i - j);
      // 1 ** -Infinity is NaN in this language; α = ∞ is the nearest-neighbour chain.
      if (distance > 0) couplings[i * sites + j] = distance === 1 ? j0 : j0 * distance ** -alpha;
    }
  }
  return couplings;
}
