/** Whether a bright site is in the up state (σ = +1) or the down state. */
export type BrightIs = "up" | "down";

/** Spins of one evolution time, one bit each. */
export interface PackedSpins {
  shots: number;
  sites: number;
  /** `[site][word]`, ⌈shots / 32⌉ words a site; shot s is bit s mod 32 of word ⌊s / 32⌋, 1 = up (σ = +1). */
  words: Uint32Array;
}

const LARGEST_COUNT = 65535;

/** Returns the 32-bit words a site needs. */
export function wordsPerSite(shots: number): number {
  return Math.ceil(shots / 32);
}

/**
 * Returns the spins read from counts `[shot][site]`. A site is bright when its count is strictly above its threshold
 * `[site]`; fractional counts (float32) are compared in float32. Bits beyond the last shot are 0.
 * Throws RangeError when the array lengths contradict the shape.
 */
export function packSpins(
  counts: Uint16Array | Float32Array,
  shots: number,
  sites: number,
  thresholds: Float64Array,
  brightIs: BrightIs,
): PackedSpins {
  if (counts.length !== shots * sites) throw new RangeError(`${counts.length} counts are not ${shots} × ${sites}`);
  if (thresholds.length !== sites) throw new RangeError(`${thresholds.length} thresholds for ${sites} sites`);
  const stride = wordsPerSite(shots);
  const words = new Uint32Array(sites * stride);
  if (counts instanceof Uint16Array) packWhole(counts, shots, sites, thresholds, words);
  else packFractional(counts, shots, sites, thresholds, words);
  if (brightIs === "down") turnRound(words, shots, stride);
  return { shots, sites, words };
}

/** Sets the bits of bright sites. A whole count is above θ when it is above ⌊θ⌋, and the sign bit tells so at once. */
function packWhole(
  counts: Uint16Array,
  shots: number,
  sites: number,
  thresholds: Float64Array,
  words: Uint32Array,
): void {
  const limits = Int32Array.from(thresholds, (threshold) =>
    Number.isNaN(threshold) ? LARGEST_COUNT : Math.max(-1, Math.min(LARGEST_COUNT, Math.floor(threshold))),
  );
  const stride = wordsPerSite(shots);
  for (let w = 0; w < stride; w++) {
    const end = Math.min(32, shots - w * 32);
    for (let i = 0; i < sites; i++) {
      const limit = limits[i];
      let word = 0;
      for (let bit = 0, at = w * 32 * sites + i; bit < end; bit++, at += sites) {
        word |= ((limit - counts[at]) >>> 31) << bit;
      }
      words[i * stride + w] = word;
    }
  }
}

function packFractional(
  counts: Float32Array,
  shots: number,
  sites: number,
  thresholds: Float64Array,
  words: Uint32Array,
): void {
  const limits = Float32Array.from(thresholds);
  const stride = wordsPerSite(shots);
  for (let s = 0, at = 0; s < shots; s++) {
    for (let i = 0; i < sites; i++, at++) {
      if (counts[at] > limits[i]) words[i * stride + (s >>> 5)] |= 1 << (s & 31);
    }
  }
}

function turnRound(words: Uint32Array, shots: number, stride: number): void {
  const inLastWord = shots & 31;
  for (let at = 0; at < words.length; at++) {
    const isLast = at % stride === stride - 1 && inLastWord > 0;
    words[at] = ~words[at] & (isLast ? (1 << inLastWord) - 1 : -1);
  }
}

/** Returns how many bits of a 32-bit word are set. */
export function countBits(word: number): number {
  const pairs = word - ((word >>> 1) & 0x55555555);
  const quads = (pairs & 0x33333333) + ((pairs >>> 2) & 0x33333333);
  return Math.imul((quads + (quads >>> 4)) & 0x0f0f0f0f, 0x01010101) >>> 24;
}
