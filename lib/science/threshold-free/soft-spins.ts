/** Soft spins of one evolution time. */
export interface SoftSpins {
  shots: number;
  sites: number;
  /** `[site][shot]` */
  values: Float64Array;
}

/**
 * Returns the soft spins of whole counts `[shot][site]` under weights `[site][bin]`; counts beyond the last bin are in it.
 * Throws RangeError when the array lengths contradict the shape.
 */
export function softenCounts(counts: Uint16Array, shots: number, sites: number, weights: readonly Float64Array[]): SoftSpins {
  if (counts.length !== shots * sites) throw new RangeError(`${counts.length} counts are not ${shots} × ${sites}`);
  if (weights.length !== sites) throw new RangeError(`${weights.length} weights for ${sites} sites`);
  const values = new Float64Array(sites * shots);
  weights.forEach((weight, i) => {
    const last = weight.length - 1;
    for (let s = 0, at = i; s < shots; s++, at += sites) values[i * shots + s] = weight[Math.min(counts[at], last)];
  });
  return { shots, sites, values };
}
