/** Weighted sums over shots for 32 bootstrap replicates at once, in double precision and in the order of the shots. */

/** Replicates of a block, one byte each in a shot's row of multiplicities. */
const REPLICATES: usize = 32;
/** Shots whose multiplicities are held as doubles at a time: 16 KiB. */
const STRIP: usize = 64;
const DOUBLE: usize = 8;

/**
 * Adds Σ_s weight[s][b] · row[s] to `sums` [row][32], float64, which the caller sets to 0. `weights` are bytes [shot][32], `rows` are
 * float64 [row][shot], and `count` is a multiple of 4. `scratch` holds 16 384 bytes.
 */
export function addWeighted(weights: usize, rows: usize, shots: usize, count: usize, sums: usize, scratch: usize): void {
  const stride = shots * DOUBLE;
  for (let first: usize = 0; first < shots; first += STRIP) {
    const length = min(STRIP, shots - first);
    widen(weights + first * REPLICATES, length, scratch);
    for (let row: usize = 0; row < count; row += 4) {
      const values = rows + row * stride + first * DOUBLE;
      const out = sums + row * REPLICATES * DOUBLE;
      for (let b: usize = 0; b < REPLICATES; b += 4) addTile(values, stride, scratch + b * DOUBLE, length, out + b * DOUBLE);
    }
  }
}

/** Writes `length` rows of bytes as doubles. */
function widen(weights: usize, length: usize, target: usize): void {
  for (let at: usize = 0; at < length * REPLICATES; at += 8) {
    const words = v128.load8x8_u(weights + at);
    const low = i32x4.extend_low_i16x8_u(words);
    const high = i32x4.extend_high_i16x8_u(words);
    const to = target + at * DOUBLE;
    v128.store(to, f64x2.convert_low_i32x4_u(low));
    v128.store(to, f64x2.convert_low_i32x4_u(i8x16.shuffle(low, low, 8, 9, 10, 11, 12, 13, 14, 15, 8, 9, 10, 11, 12, 13, 14, 15)), 16);
    v128.store(to, f64x2.convert_low_i32x4_u(high), 32);
    v128.store(to, f64x2.convert_low_i32x4_u(i8x16.shuffle(high, high, 8, 9, 10, 11, 12, 13, 14, 15, 8, 9, 10, 11, 12, 13, 14, 15)), 48);
  }
}

/** Four rows times four replicates, all sums in registers. */
function addTile(values: usize, stride: usize, weights: usize, length: usize, out: usize): void {
  const next: usize = REPLICATES * DOUBLE;
  let a0 = v128.load(out);
  let a1 = v128.load(out, 16);
  let b0 = v128.load(out + next);
  let b1 = v128.load(out + next, 16);
  let c0 = v128.load(out + 2 * next);
  let c1 = v128.load(out + 2 * next, 16);
  let d0 = v128.load(out + 3 * next);
  let d1 = v128.load(out + 3 * next, 16);
  const second = values + stride;
  const third = second + stride;
  const fourth = third + stride;
  for (let at: usize = 0; at < length * DOUBLE; at += DOUBLE) {
    const w0 = v128.load(weights);
    const w1 = v128.load(weights, 16);
    const a = v128.load64_splat(values + at);
    a0 = f64x2.add(a0, f64x2.mul(a, w0));
    a1 = f64x2.add(a1, f64x2.mul(a, w1));
    const b = v128.load64_splat(second + at);
    b0 = f64x2.add(b0, f64x2.mul(b, w0));
    b1 = f64x2.add(b1, f64x2.mul(b, w1));
    const c = v128.load64_splat(third + at);
    c0 = f64x2.add(c0, f64x2.mul(c, w0));
    c1 = f64x2.add(c1, f64x2.mul(c, w1));
    const d = v128.load64_splat(fourth + at);
    d0 = f64x2.add(d0, f64x2.mul(d, w0));
    d1 = f64x2.add(d1, f64x2.mul(d, w1));
    weights += next;
  }
  v128.store(out, a0);
  v128.store(out, a1, 16);
  v128.store(out + next, b0);
  v128.store(out + next, b1, 16);
  v128.store(out + 2 * next, c0);
  v128.store(out + 2 * next, c1, 16);
  v128.store(out + 3 * next, d0);
  v128.store(out + 3 * next, d1, 16);
}
