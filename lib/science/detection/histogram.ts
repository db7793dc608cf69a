/** How often each count occurs at a site. */

export interface SiteHistogram {
  /** Lower edge of the first bin, a whole number; bins are one count wide, so bin b holds `firstBin + b ≤ n < firstBin + b + 1`. */
  firstBin: number;
  /** `[bin]` */
  frequencies: Uint32Array;
}

/** Fractional counts beyond this size fall into the end bins, so that a wild value cannot claim gigabytes. */
export const LARGEST_BINNED_COUNT = 65_536;

/**
 * Returns one histogram a site from `counts`, `[shot][site]`. Whole counts (uint16) start at bin 0 and end with the
 * largest count; fractional ones (float32) start at the least count, rounded down. Shots marked in `setAside`
 * (`[shot]`, 1 = left out) and NaN are not counted. No bins where nothing was counted.
 */
export function countHistograms(
  counts: Uint16Array | Float32Array,
  sites: number,
  setAside: Uint8Array | null = null,
): SiteHistogram[] {
  const histograms: SiteHistogram[] = [];
  for (let i = 0; i < sites; i++) histograms.push(countSite(counts, sites, i, setAside));
  return histograms;
}

function countSite(
  counts: Uint16Array | Float32Array,
  sites: number,
  site: number,
  setAside: Uint8Array | null,
): SiteHistogram {
  const shots = Math.floor(counts.length / sites);
  const bins = new Int32Array(shots);
  let counted = 0;
  let least = counts instanceof Uint16Array ? 0 : Number.POSITIVE_INFINITY;
  let largest = Number.NEGATIVE_INFINITY;
  for (let s = 0; s < shots; s++) {
    const n = counts[s * sites + site];
    if (Number.isNaN(n) || (setAside !== null && setAside[s] === 1)) continue;
    const bin = Math.floor(Math.max(-LARGEST_BINNED_COUNT, Math.min(LARGEST_BINNED_COUNT, n)));
    bins[counted] = bin;
    counted += 1;
    if (bin < least) least = bin;
    if (bin > largest) largest = bin;
  }
  if (counted === 0) return { firstBin: 0, frequencies: new Uint32Array(0) };
  const frequencies = new Uint32Array(largest - least + 1);
  for (let s = 0; s < counted; s++) frequencies[bins[s] - least] += 1;
  return { firstBin: least, frequencies };
}

/** Returns the histogram of both sets of shots together; order and grouping make no difference. */
export function mergeHistograms(first: SiteHistogram, second: SiteHistogram): SiteHistogram {
  if (first.frequencies.length === 0) return copyHistogram(second);
  if (second.frequencies.length === 0) return copyHistogram(first);
  const firstBin = Math.min(first.firstBin, second.firstBin);
  const end = Math.max(first.firstBin + first.frequencies.length, second.firstBin + second.frequencies.length);
  const frequencies = new Uint32Array(end - firstBin);
  for (const part of [first, second]) {
    for (let b = 0; b < part.frequencies.length; b++) frequencies[part.firstBin - firstBin + b] += part.frequencies[b];
  }
  return { firstBin, frequencies };
}

function copyHistogram(histogram: SiteHistogram): SiteHistogram {
  return { firstBin: histogram.firstBin, frequencies: histogram.frequencies.slice() };
}

/** Returns the number of shots in a histogram. */
export function shotsInHistogram(histogram: SiteHistogram): number {
  let shots = 0;
  for (const frequency of histogram.frequencies) shots += frequency;
  return shots;
}

/** Returns the lower edge of the highest bin that holds a shot; −1 without shots. */
export function largestBin(histogram: SiteHistogram): number {
  const last = histogram.frequencies.findLastIndex((frequency) => frequency > 0);
  return last < 0 ? -1 : histogram.firstBin + last;
}
