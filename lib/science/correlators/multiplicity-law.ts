/**
 * The first step of a bootstrap draw: a multiplicity from Poisson(λ) by one random byte, and by a 32-bit word for the
 * few bytes that do not decide. λ is below 1 so that a replicate seldom overshoots M shots, and chosen such that whole
 * 256ths of the law leave only 2/256 to the finer draw.
 */
export const MULTIPLICITY_RATE = 0.978;

/** Bytes u = 0 … 255 that decide at once: 96 give 0, the next 94 give 1, then 46, 15 and 3; u ≥ 254 draws again. */
export const BYTE_SHARES: readonly number[] = [96, 94, 46, 15, 3];

/** Multiplicities from 0 to 15; beyond, the law holds 2e-14. */
export const LARGEST_FIRST_DRAW = 15;

const BYTES = 256;
const WORDS = 2 ** 32;

/**
 * Returns the limits of the finer draw, 16 words: the multiplicity is the number of limits not above a uniform 32-bit
 * word, at most 15. They follow the part of the law that the whole 256ths leave over.
 */
export function fineDrawLimits(): Uint32Array {
  const decided = BYTE_SHARES.reduce((sum, share) => sum + share, 0);
  const limits = new Uint32Array(LARGEST_FIRST_DRAW + 1);
  let probability = Math.exp(-MULTIPLICITY_RATE);
  let left = 0;
  for (let value = 0; value <= LARGEST_FIRST_DRAW; value++) {
    left += BYTES * probability - (BYTE_SHARES[value] ?? 0);
    limits[value] = Math.min(WORDS - 1, Math.round((left / (BYTES - decided)) * WORDS));
    probability *= MULTIPLICITY_RATE / (value + 1);
  }
  return limits;
}
