/** Philox4x32-10 (Salmon et al. 2011) on four counters at once, one a lane; equal to lib/science/stats/philox.ts. */

const MULTIPLIER_0: u32 = 0xd2511f53;
const MULTIPLIER_1: u32 = 0xcd9e8d57;
const WEYL_0: u32 = 0x9e3779b9;
const WEYL_1: u32 = 0xbb67ae85;
const ROUNDS: i32 = 10;

// @ts-ignore: decorator
@inline
function lowWords(even: v128, odd: v128): v128 {
  return v128.shuffle<i32>(even, odd, 0, 2, 4, 6);
}

// @ts-ignore: decorator
@inline
function highWords(even: v128, odd: v128): v128 {
  return v128.shuffle<i32>(even, odd, 1, 3, 5, 7);
}

// @ts-ignore: decorator
@inline
export function multiplyLow(factor: u32, x: v128): v128 {
  const m = i32x4.splat(factor);
  return lowWords(i64x2.extmul_low_i32x4_u(x, m), i64x2.extmul_high_i32x4_u(x, m));
}

// @ts-ignore: decorator
@inline
export function multiplyHigh(factor: u32, x: v128): v128 {
  const m = i32x4.splat(factor);
  return highWords(i64x2.extmul_low_i32x4_u(x, m), i64x2.extmul_high_i32x4_u(x, m));
}

/** Rounds `first` … 9 on the state (c0, c1, c2, c3); word m goes to `out + m · stride`. */
// @ts-ignore: decorator
@inline
function lastRounds(
  c0: v128, c1: v128, c2: v128, c3: v128, first: i32, key0: u32, key1: u32, out: usize, stride: usize,
): void {
  const m0 = i32x4.splat(MULTIPLIER_0);
  const m1 = i32x4.splat(MULTIPLIER_1);
  const step0 = i32x4.splat(WEYL_0);
  const step1 = i32x4.splat(WEYL_1);
  let k0 = i32x4.splat(key0 + u32(first) * WEYL_0);
  let k1 = i32x4.splat(key1 + u32(first) * WEYL_1);
  for (let round = first; round < ROUNDS; round++) {
    const even0 = i64x2.extmul_low_i32x4_u(c0, m0);
    const odd0 = i64x2.extmul_high_i32x4_u(c0, m0);
    const even1 = i64x2.extmul_low_i32x4_u(c2, m1);
    const odd1 = i64x2.extmul_high_i32x4_u(c2, m1);
    c0 = v128.xor(v128.xor(highWords(even1, odd1), c1), k0);
    c2 = v128.xor(v128.xor(highWords(even0, odd0), c3), k1);
    c1 = lowWords(even1, odd1);
    c3 = lowWords(even0, odd0);
    k0 = i32x4.add(k0, step0);
    k1 = i32x4.add(k1, step1);
  }
  v128.store(out, c0);
  v128.store(out + stride, c1);
  v128.store(out + 2 * stride, c2);
  v128.store(out + 3 * stride, c3);
}

/** What the second round multiplies when counter words 0 and 2 are the same in all lanes: free of counter word 0. */
// @ts-ignore: decorator
@inline
export function secondRoundFactor(counter1: v128, counter2: u32, key0: u32): v128 {
  const high = u32((u64(MULTIPLIER_1) * u64(counter2)) >> 32);
  return v128.xor(counter1, i32x4.splat(high ^ key0));
}

// @ts-ignore: decorator
@inline
export function secondRoundHigh(factor: v128): v128 {
  return multiplyHigh(MULTIPLIER_0, factor);
}

// @ts-ignore: decorator
@inline
export function secondRoundLow(factor: v128): v128 {
  return multiplyLow(MULTIPLIER_0, factor);
}

/**
 * The blocks of counters (counter0, lane's counter1, counter2, counter3), whose first 2.5 rounds are mostly the same
 * in all lanes; `high` and `low` are those of `secondRoundFactor`. Word m of the four lanes goes to `out + m · stride`.
 */
// @ts-ignore: decorator
@inline
export function philoxAcrossLanes(
  high: v128, low: v128, counter0: u32, counter2: u32, counter3: u32, key0: u32, key1: u32, out: usize, stride: usize,
): void {
  const first = u64(MULTIPLIER_0) * u64(counter0);
  const uniform2 = u32(first >> 32) ^ counter3 ^ key1;
  const second = u64(MULTIPLIER_1) * u64(uniform2);
  const uniform0 = u32(second >> 32) ^ (MULTIPLIER_1 * counter2) ^ (key0 + WEYL_0);
  const third = u64(MULTIPLIER_0) * u64(uniform0);
  const varying = v128.xor(high, i32x4.splat(u32(first) ^ (key1 + WEYL_1)));
  const m1 = i32x4.splat(MULTIPLIER_1);
  const even = i64x2.extmul_low_i32x4_u(varying, m1);
  const odd = i64x2.extmul_high_i32x4_u(varying, m1);
  lastRounds(
    v128.xor(highWords(even, odd), i32x4.splat(u32(second) ^ (key0 + 2 * WEYL_0))),
    lowWords(even, odd),
    v128.xor(low, i32x4.splat(u32(third >> 32) ^ (key1 + 2 * WEYL_1))),
    i32x4.splat(u32(third)),
    3, key0, key1, out, stride,
  );
}

/** The blocks of counters (counter0 … counter0 + 3, counter1, counter2, counter3), 16 words in stream order at `out`. */
export function philoxAhead(
  counter0: u32, counter1: u32, counter2: u32, counter3: u32, key0: u32, key1: u32, out: usize,
): void {
  const lanes = i32x4.add(i32x4.splat(counter0), i32x4(0, 1, 2, 3));
  lastRounds(
    lanes, i32x4.splat(counter1), i32x4.splat(counter2), i32x4.splat(counter3), 0, key0, key1, out, 16,
  );
  const a = v128.load(out);
  const b = v128.load(out, 16);
  const c = v128.load(out, 32);
  const d = v128.load(out, 48);
  const ab = v128.shuffle<i32>(a, b, 0, 4, 1, 5);
  const cd = v128.shuffle<i32>(c, d, 0, 4, 1, 5);
  const abHigh = v128.shuffle<i32>(a, b, 2, 6, 3, 7);
  const cdHigh = v128.shuffle<i32>(c, d, 2, 6, 3, 7);
  v128.store(out, v128.shuffle<i64>(ab, cd, 0, 2));
  v128.store(out, v128.shuffle<i64>(ab, cd, 1, 3), 16);
  v128.store(out, v128.shuffle<i64>(abHigh, cdHigh, 0, 2), 32);
  v128.store(out, v128.shuffle<i64>(abHigh, cdHigh, 1, 3), 48);
}
