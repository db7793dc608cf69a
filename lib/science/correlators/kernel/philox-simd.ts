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

/** All rounds on the counters (c0, c1, c2, c3), four lanes each; word m goes to `out + 16 m`. */
// @ts-ignore: decorator
@inline
function cipher(c0: v128, c1: v128, c2: v128, c3: v128, key0: u32, key1: u32, out: usize): void {
  const m0 = i32x4.splat(MULTIPLIER_0);
  const m1 = i32x4.splat(MULTIPLIER_1);
  const step0 = i32x4.splat(WEYL_0);
  const step1 = i32x4.splat(WEYL_1);
  let k0 = i32x4.splat(key0);
  let k1 = i32x4.splat(key1);
  for (let round = 0; round < ROUNDS; round++) {
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
  v128.store(out, c1, 16);
  v128.store(out, c2, 32);
  v128.store(out, c3, 48);
}

/**
 * The blocks of counters (counter0 … counter0 + 3, counter1, counter2, counter3) as the states of four generators: word m of the
 * four at `out + 16 m`.
 */
export function philoxStates(
  counter0: u32, counter1: u32, counter2: u32, counter3: u32, key0: u32, key1: u32, out: usize,
): void {
  const lanes = i32x4.add(i32x4.splat(counter0), i32x4(0, 1, 2, 3));
  cipher(lanes, i32x4.splat(counter1), i32x4.splat(counter2), i32x4.splat(counter3), key0, key1, out);
}

/** The blocks of counters (counter0 … counter0 + 3, counter1, counter2, counter3), 16 words in stream order at `out`. */
export function philoxAhead(
  counter0: u32, counter1: u32, counter2: u32, counter3: u32, key0: u32, key1: u32, out: usize,
): void {
  philoxStates(counter0, counter1, counter2, counter3, key0, key1, out);
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
