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
  const fourthsEnd = values + (usize(replicates & ~7) << 3);
  let sum0 = f64x2.splat(0);
  let sum1 = f64x2.splat(0);
  let sum2 = f64x2.splat(0);
  let sum3 = f64x2.splat(0);
  let low = f64x2.splat(Infinity);
  let high = f64x2.splat(-Infinity);
  for (let at = values; at < fourthsEnd; at += 64) {
    const a = v128.load(at);
    const b = v128.load(at, 16);
    const c = v128.load(at, 32);
    const d = v128.load(at, 48);
    sum0 = f64x2.add(sum0, a);
    sum1 = f64x2.add(sum1, b);
    sum2 = f64x2.add(sum2, c);
    sum3 = f64x2.add(sum3, d);
    low = f64x2.pmin(low, f64x2.pmin(f64x2.pmin(a, b), f64x2.pmin(c, d)));
    high = f64x2.pmax(high, f64x2.pmax(f64x2.pmax(a, b), f64x2.pmax(c, d)));
  }
  let sum = sumLanes(f64x2.add(f64x2.add(sum0, sum1), f64x2.add(sum2, sum3)));
  smallest = min(f64x2.extract_lane(low, 0), f64x2.extract_lane(low, 1));
  largest = max(f64x2.extract_lane(high, 0), f64x2.extract_lane(high, 1));
  for (let at = fourthsEnd; at < end; at += 8) {
    sum += load<f64>(at);
    smallest = min(smallest, load<f64>(at));
    largest = max(largest, load<f64>(at));
  }
  if (smallest == largest) return 0;
  const n = f64(replicates);
  return Math.sqrt(squaresAround(values, fourthsEnd, end, sum / n, n) / (n - 1));
}

// @ts-ignore: decorator
@inline
function sumLanes(x: v128): f64 {
  return f64x2.extract_lane(x, 0) + f64x2.extract_lane(x, 1);
}

function squaresAround(values: usize, fourthsEnd: usize, end: usize, centre: f64, n: f64): f64 {
  const centres = f64x2.splat(centre);
  let squaresA = f64x2.splat(0);
  let squaresB = f64x2.splat(0);
  let driftsA = f64x2.splat(0);
  let driftsB = f64x2.splat(0);
  for (let at = values; at < fourthsEnd; at += 64) {
    const a = f64x2.sub(v128.load(at), centres);
    const b = f64x2.sub(v128.load(at, 16), centres);
    const c = f64x2.sub(v128.load(at, 32), centres);
    const d = f64x2.sub(v128.load(at, 48), centres);
    squaresA = f64x2.add(squaresA, f64x2.add(f64x2.mul(a, a), f64x2.mul(b, b)));
    squaresB = f64x2.add(squaresB, f64x2.add(f64x2.mul(c, c), f64x2.mul(d, d)));
    driftsA = f64x2.add(driftsA, f64x2.add(a, b));
    driftsB = f64x2.add(driftsB, f64x2.add(c, d));
  }
  let square = sumLanes(f64x2.add(squaresA, squaresB));
  let drift = sumLanes(f64x2.add(driftsA, driftsB));
  for (let at = fourthsEnd; at < end; at += 8) {
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
  findBin(sizes, rank);
  const gathered = gatherBin(values, replicates, bins, scratch);
  const below = load<f64>(scratch + (usize(rankInBin) << 3));
  if (share == 0) return below;
  let next = rankInBin + 1;
  if (next == gathered) {
    findBin(sizes, rank + 1);
    gatherBin(values, replicates, bins, scratch);
    next = 0;
  }
  return below + (load<f64>(scratch + (usize(next) << 3)) - below) * share;
}

let bin: u32 = 0;
let rankInBin: u32 = 0;

/** Finds the bin of the value of a rank, and its rank there. */
function findBin(sizes: usize, rank: u32): void {
  bin = 0;
  rankInBin = rank;
  let size = load<u32>(sizes);
  while (rankInBin >= size) {
    rankInBin -= size;
    bin++;
    size = load<u32>(sizes + (usize(bin) << 2));
  }
}

/** Writes the bin's values to `scratch` in ascending order; returns their number. */
function gatherBin(values: usize, replicates: u32, bins: usize, scratch: usize): u32 {
  const wanted = i8x16.splat(u8(bin));
  let found: u32 = 0;
  for (let b: usize = 0; b < usize(replicates); b += 16) {
    let hits: u32 = i8x16.bitmask(i8x16.eq(v128.load(bins + b), wanted));
    while (hits) {
      const at = b + ctz(hits);
      hits &= hits - 1;
      if (at < usize(replicates)) found = insertSorted(scratch, found, load<f64>(values + (at << 3)));
    }
  }
  return found;
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
