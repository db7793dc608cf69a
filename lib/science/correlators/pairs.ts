/** Pairs of sites i < j in lexicographic order: 01, 02, …, 0(N−1), 12, … */

/** Returns the number of pairs of `sites` sites. */
export function pairCount(sites: number): number {
  return (sites * (sites - 1)) / 2;
}

/** Returns the sites of every pair, `[pair][2]`. */
export function listPairs(sites: number): Uint16Array {
  const pairs = new Uint16Array(2 * pairCount(sites));
  let at = 0;
  for (let i = 0; i < sites; i++) {
    for (let j = i + 1; j < sites; j++) {
      pairs[at++] = i;
      pairs[at++] = j;
    }
  }
  return pairs;
}

/** Returns the place of two different sites, in either order, in the pair list. */
export function pairIndex(sites: number, i: number, j: number): number {
  const low = Math.min(i, j);
  const high = Math.max(i, j);
  return low * sites - (low * (low + 1)) / 2 + high - low - 1;
}
