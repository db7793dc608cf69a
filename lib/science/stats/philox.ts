/**
 * Philox4x32-10, the counter-based generator of Salmon, Moraes, Dror and Shaw (SC'11, "Parallel random numbers: as
 * easy as 1, 2, 3"), with 32-bit integer operations only. A draw depends on its counter and key alone, so results are
 * the same on any number of threads and in any order.
 */

const MULTIPLIER_0 = 0xd2511f53;
const MULTIPLIER_1 = 0xcd9e8d57;
const WEYL_0 = 0x9e3779b9;
const WEYL_1 = 0xbb67ae85;
const ROUNDS = 10;
const LARGEST_SEED = Number.MAX_SAFE_INTEGER;

/** Independent uniform draws in a fixed order; see `createRandomStream`. */
export interface RandomStream {
  /** The next whole number in 0 … 2³² − 1. */
  nextUint32(): number;
  /** The next double in [0, 1), a multiple of 2⁻⁵³; takes two 32-bit draws. */
  nextUniform(): number;
}

/**
 * Returns the high 32 bits of the 64-bit product of two unsigned 32-bit integers. By 16-bit halves: the rounding of
 * `Math.floor(a * b / 2 ** 32)` is wrong about twice in ten million products.
 */
export function multiplyHigh(a: number, b: number): number {
  const aLow = a & 0xffff;
  const aHigh = a >>> 16;
  const bLow = b & 0xffff;
  const bHigh = b >>> 16;
  const middle = aHigh * bLow + ((aLow * bLow) >>> 16);
  const carry = (middle & 0xffff) + aLow * bHigh;
  return (aHigh * bHigh + (middle >>> 16) + (carry >>> 16)) >>> 0;
}

/**
 * Writes the four 32-bit words of one Philox4x32-10 block to `out[offset … offset + 3]`.
 * All counter and key words are taken modulo 2³².
 */
export function philoxBlock(
  counter0: number,
  counter1: number,
  counter2: number,
  counter3: number,
  key0: number,
  key1: number,
  out: Uint32Array,
  offset: number,
): void {
  let c0 = counter0 >>> 0;
  let c1 = counter1 >>> 0;
  let c2 = counter2 >>> 0;
  let c3 = counter3 >>> 0;
  let k0 = key0 >>> 0;
  let k1 = key1 >>> 0;
  for (let round = 0; round < ROUNDS; round++) {
    const high0 = multiplyHigh(MULTIPLIER_0, c0);
    const low0 = Math.imul(MULTIPLIER_0, c0);
    const high1 = multiplyHigh(MULTIPLIER_1, c2);
    const low1 = Math.imul(MULTIPLIER_1, c2);
    c0 = (high1 ^ c1 ^ k0) >>> 0;
    c1 = low1 >>> 0;
    c2 = (high0 ^ c3 ^ k1) >>> 0;
    c3 = low0 >>> 0;
    k0 = (k0 + WEYL_0) >>> 0;
    k1 = (k1 + WEYL_1) >>> 0;
  }
  out[offset] = c0;
  out[offset + 1] = c1;
  out[offset + 2] = c2;
  out[offset + 3] = c3;
}

/** Tells whether a number can serve as a seed: a whole number in 0 … 2⁵³ − 1. */
export function isSeed(seed: number): boolean {
  return Number.isInteger(seed) && seed >= 0 && seed <= LARGEST_SEED;
}

/** Returns the two key words of a seed: its low 32 bits, and the bits above them. Throws RangeError if it is no seed. */
export function seedKey(seed: number): { key0: number; key1: number } {
  if (!isSeed(seed)) throw new RangeError(`A seed is a whole number from 0 to 2^53 - 1, not ${seed}`);
  return { key0: seed >>> 0, key1: Math.floor(seed / 0x100000000) };
}

/**
 * Returns the stream of (seed, purpose, index, replicate): block `draw` is Philox of the counter
 * (draw, replicate, index, purpose) under the seed's key, its words given in order. Streams that differ in any of the
 * four never share a block. `purpose` is one of random-purposes.ts; the others are whole numbers below 2³².
 * Throws RangeError if `seed` is no seed, or once 2³⁴ words have been drawn.
 */
export function createRandomStream(seed: number, purpose: number, index: number, replicate = 0): RandomStream {
  const { key0, key1 } = seedKey(seed);
  const words = new Uint32Array(4);
  let draw = 0;
  let used = 4;

  function nextUint32(): number {
    if (used === 4) {
      if (draw > 0xffffffff) throw new RangeError("A random stream gives at most 2^34 words");
      philoxBlock(draw, replicate, index, purpose, key0, key1, words, 0);
      draw += 1;
      used = 0;
    }
    const word = words[used];
    used += 1;
    return word;
  }

  function nextUniform(): number {
    const high = nextUint32() >>> 5;
    const low = nextUint32() >>> 6;
    return (high * 0x4000000 + low) / 0x20000000000000;
  }

  return { nextUint32, nextUniform };
}
