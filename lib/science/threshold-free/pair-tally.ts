/** How often two sites show each pair of counts, without the pairs that never occur. */
export interface PairTally {
  shots: number;
  /** `[cell]`, bin of the first site's count. */
  binI: Uint16Array;
  /** `[cell]`, bin of the second site's count. */
  binJ: Uint16Array;
  /** `[cell]`, shots, each > 0. */
  frequencies: Float64Array;
}

/** Returns the tally of sites i and j of whole counts `[shot][site]`; counts beyond a site's last bin are in it. */
export function tallyPair(counts: Uint16Array, sites: number, i: number, j: number, binsI: number, binsJ: number): PairTally {
  const shots = counts.length / sites;
  const table = new Uint32Array(binsI * binsJ);
  for (let s = 0; s < shots; s++) {
    const a = Math.min(counts[s * sites + i], binsI - 1);
    const b = Math.min(counts[s * sites + j], binsJ - 1);
    table[a * binsJ + b] += 1;
  }
  return compressTable(table, binsJ);
}

/** Returns the tally of a full table of shots, `[bin of i][bin of j]`. */
export function compressTable(table: Uint32Array, binsJ: number): PairTally {
  let cells = 0;
  let shots = 0;
  for (const frequency of table) {
    shots += frequency;
    if (frequency > 0) cells += 1;
  }
  const tally = { shots, binI: new Uint16Array(cells), binJ: new Uint16Array(cells), frequencies: new Float64Array(cells) };
  for (let at = 0, cell = 0; at < table.length; at++) {
    if (table[at] === 0) continue;
    tally.binI[cell] = Math.floor(at / binsJ);
    tally.binJ[cell] = at % binsJ;
    tally.frequencies[cell] = table[at];
    cell += 1;
  }
  return tally;
}
