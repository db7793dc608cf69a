/**
 * Returns the p-values adjusted by Benjamini and Hochberg (1995), in the order given: those at most q form a set in which, on
 * average over repetitions, at most a share q is false when tests are independent or positively dependent. NaN stays NaN and does
 * not count as a test.
 */
export function adjustedPValues(pValues: Float64Array): Float64Array {
  const order = Uint32Array.from(pValues.keys()).filter((at) => !Number.isNaN(pValues[at]));
  order.sort((first, second) => pValues[first] - pValues[second]);
  const adjusted = new Float64Array(pValues.length).fill(Number.NaN);
  let least = 1;
  for (let rank = order.length; rank >= 1; rank--) {
    least = Math.min(least, pValues[order[rank - 1]] * (order.length / rank));
    adjusted[order[rank - 1]] = least;
  }
  return adjusted;
}

/** Returns 1 where a p-value is among the discoveries at rate q, 0 elsewhere. */
export function discoveries(pValues: Float64Array, rate: number): Uint8Array {
  return Uint8Array.from(adjustedPValues(pValues), (adjusted) => (adjusted <= rate ? 1 : 0));
}
