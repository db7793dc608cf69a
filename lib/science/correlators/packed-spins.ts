/** Whether a bright site is in the up state (σ = +1) or the down state. */
export type BrightIs = "up" | "down";

/** Spins of one evolution time, one bit each. */
export interface PackedSpins {
  shots: number;
  sites: number;
  /** `[site][word]`, ⌈shots / 32⌉ words a site; shot s is bit s mod 32 of word ⌊s / 32⌋, 1 = up (σ = +1). */
  words: Uint32Array;
}

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
  const limits = counts instanceof Float32Array ? Float32Array.from(thresholds) : thresholds;
  const stride = wordsPerSite(shots);
  const words = new Uint32Array(sites * stride);
  const whenBright = brightIs === "up" ? 1 : 0;
  for (let w = 0; w < stride; w++) {
    const first = w * 32;
    const end = Math.min(32, shots - first);
    for (let i = 0; i < sites; i++) {
      const limit = limits[i];
      let word = 0;
      for (let bit = 0, at = first * sites + i; bit < end; bit++, at += sites) {
        word |= (counts[at] > limit ? whenBright : 1 - whenBright) << bit;
      }
      words[i * stride + w] = word;
    }
  }
  return { shots, sites, words };
}

/** Returns how many bits of a 32-bit word are set. */
export function countBits(word: number): number {
  const pairs = word - ((word >>> 1) & 0x55555555);
  const quads = (pairs & 0x33333333) + ((pairs >>> 2) & 0x33333333);
  return Math.imul((quads + (quads >>> 4)) & 0x0f0f0f0f, 0x01010101) >>> 24;
}
