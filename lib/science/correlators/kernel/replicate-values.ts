/** Replicates as float64 values: from counts to correlators, their spread, and quantiles without a full sort. */

const BINS: usize = 256;
const LAST_BIN: f64 = 255;
/** Adding 2^52 rounds to a whole number that then stands in the low bits. */
const WHOLE: f64 = 4503599627370496;

let smallest: f64 = 0;
let largest: f64 = 0;

/**
 * out[b] = scale · (M n_ij − n_i n_j) · f_i[b] · f_j[b], from i32 counts of `replicates` (filled up to a multiple of 4)
 * and float64 factors. The bracket is exact, so a site that never flips gives 0.
 */
export function correlate(
  both: usize, countI: usize, countJ: usize, factorI: usize, factorJ: usize, shots: f64, scale: f64, replicates: u32,
  out: usize,
): void {
  const m = f64x2.splat(shots);
  const k = f64x2.splat(scale);
  for (let b: usize = 0; b < usize(replicates); b += 2) {
    const bothUp = f64x2.convert_low_i32x4_s(v128.load64_zero(both + (b << 2)));
    const upI = f64x2.convert_low_i32x4_s(v128.load64_zero(countI + (b << 2)));
    const upJ = f64x2.convert_low_i32x4_s(v128.load64_zero(countJ + (b << 2)));
    const bracket = f64x2.sub(f64x2.mul(m, bothUp), f64x2.mul(upI, upJ));
    const factors = f64x2.mul(v128.load(factorI + (b << 3)), v128.load(factorJ + (b << 3)));
    v128.store(out + (b << 3), f64x2.mul(f64x2.mul(k, bracket), factors));
  }
}

/** out[b] = (2 n_i / M − 1 − offset[b]) · factor[b] */
export function average(
  count: usize, factor: usize, offset: usize, shots: f64, replicates: u32, out: usize,
): void {
  for (let b: usize = 0; b < usize(replicates); b++) {
    const read = (2 * f64(load<i32>(count + (b << 2)))) / shots - 1;
    store<f64>(out + (b << 3), (read - load<f64>(offset + (b << 3))) * load<f64>(factor + (b << 3)));
  }
}

/** target[b] += share · values[b] */
export function addShare(values: usize, share: f64, replicates: u32, target: usize): void {
  for (let b: usize = 0; b < usize(replicates); b++) {
    const at = target + (b << 3);
    store<f64>(at, load<f64>(at) + share * load<f64>(values + (b << 3)));
  }
}

/** The standard deviation (n − 1; two passes) of at least two values; it also learns their range for `sortIntoBins`. */
export function spread(values: usize, replicates: u32): f64 {
  const end = values + (usize(replicates) << 3);
  const pairsEnd = values + (usize(replicates & ~1) << 3);
  let sums = f64x2.splat(0);
  let low = f64x2.splat(Infinity);
  let high = f64x2.splat(-Infinity);
  for (let at = values; at < pairsEnd; at += 16) {
    const x = v128.load(at);
    sums = f64x2.add(sums, x);
    low = f64x2.pmin(low, x);
    high = f64x2.pmax(high, x);
  }
  let sum = f64x2.extract_lane(sums, 0) + f64x2.extract_lane(sums, 1);
  smallest = min(f64x2.extract_lane(low, 0), f64x2.extract_lane(low, 1));
  largest = max(f64x2.extract_lane(high, 0), f64x2.extract_lane(high, 1));
  for (let at = pairsEnd; at < end; at += 8) {
    sum += load<f64>(at);
    smallest = min(smallest, load<f64>(at));
    largest = max(largest, load<f64>(at));
  }
  if (smallest == largest) return 0;
  return Math.sqrt(squaresAround(values, pairsEnd, end, sum / f64(replicates), f64(replicates)) / f64(replicates - 1));
}

function squaresAround(values: usize, pairsEnd: usize, end: usize, centre: f64, n: f64): f64 {
  const centres = f64x2.splat(centre);
  let squares = f64x2.splat(0);
  let drifts = f64x2.splat(0);
  for (let at = values; at < pairsEnd; at += 16) {
    const d = f64x2.sub(v128.load(at), centres);
    squares = f64x2.add(squares, f64x2.mul(d, d));
    drifts = f64x2.add(drifts, d);
  }
  let square = f64x2.extract_lane(squares, 0) + f64x2.extract_lane(squares, 1);
  let drift = f64x2.extract_lane(drifts, 0) + f64x2.extract_lane(drifts, 1);
  for (let at = pairsEnd; at < end; at += 8) {
    const d = load<f64>(at) - centre;
    square += d * d;
    drift += d;
  }
  return square - (drift * drift) / n;
}

/** How many values are less than `limit`. */
export function countBelow(values: usize, replicates: u32, limit: f64): u32 {
  let below: u32 = 0;
  for (let b: usize = 0; b < usize(replicates); b++) below += u32(load<f64>(values + (b << 3)) < limit);
  return below;
}

/**
 * Notes which of 256 bins between the extremes each value is in: a byte each in `bins` (filled up to a multiple of 16),
 * sizes in `sizes` (u32). Rounding is monotonic, so bins are in the order of the values.
 */
export function sortIntoBins(values: usize, replicates: u32, bins: usize, sizes: usize): void {
  memory.fill(sizes, 0, BINS << 2);
  if (smallest == largest) return;
  const scale = f64x2.splat(LAST_BIN / (largest - smallest));
  const origin = f64x2.splat(smallest);
  for (let b: usize = 0; b < usize(replicates); b += 16) {
    const at = values + (b << 3);
    const low = i16x8.narrow_i32x4_u(binsOf4(at, origin, scale), binsOf4(at + 32, origin, scale));
    const high = i16x8.narrow_i32x4_u(binsOf4(at + 64, origin, scale), binsOf4(at + 96, origin, scale));
    v128.store(bins + b, i8x16.narrow_i16x8_u(low, high));
  }
  for (let at = bins; at < bins + replicates; at++) {
    const size = sizes + (usize(load<u8>(at)) << 2);
    store<u32>(size, load<u32>(size) + 1);
  }
}

// @ts-ignore: decorator
@inline
function binsOf4(at: usize, origin: v128, scale: v128): v128 {
  const whole = f64x2.splat(WHOLE);
  const a = f64x2.add(f64x2.mul(f64x2.sub(v128.load(at), origin), scale), whole);
  const b = f64x2.add(f64x2.mul(f64x2.sub(v128.load(at, 16), origin), scale), whole);
  return v128.shuffle<i32>(a, b, 0, 2, 4, 6);
}

/** The type 7 quantile at p in [0, 1] of values last given to `sortIntoBins`; `scratch` has room for all of them. */
export function quantile(
  values: usize, replicates: u32, bins: usize, sizes: usize, p: f64, scratch: usize,
): f64 {
  if (smallest == largest) return smallest;
  const place = f64(replicates - 1) * p;
  const rank = u32(place);
  const share = place - f64(rank);
  const below = orderStatistic(values, replicates, bins, sizes, rank, scratch);
  if (share == 0) return below;
  return below + (orderStatistic(values, replicates, bins, sizes, rank + 1, scratch) - below) * share;
}

function orderStatistic(
  values: usize, replicates: u32, bins: usize, sizes: usize, rank: u32, scratch: usize,
): f64 {
  let bin: usize = 0;
  let inBin = rank;
  while (inBin >= load<u32>(sizes + (bin << 2))) {
    inBin -= load<u32>(sizes + (bin << 2));
    bin++;
  }
  let found: u32 = 0;
  for (let b: usize = 0; b < usize(replicates); b += 16) {
    let hits: u32 = i8x16.bitmask(i8x16.eq(v128.load(bins + b), i8x16.splat(u8(bin))));
    while (hits) {
      const at = b + ctz(hits);
      hits &= hits - 1;
      if (at < usize(replicates)) found = insertSorted(scratch, found, load<f64>(values + (at << 3)));
    }
  }
  return load<f64>(scratch + (usize(inBin) << 3));
}

function insertSorted(sorted: usize, length: u32, value: f64): u32 {
  let at = sorted + (usize(length) << 3);
  while (at > sorted && load<f64>(at - 8) > value) {
    store<f64>(at, load<f64>(at - 8));
    at -= 8;
  }
  store<f64>(at, value);
  return length + 1;
}
