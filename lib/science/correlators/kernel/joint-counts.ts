/**
 * In how many shots of a replicate one site, or both of two, read up: first the multiplicities are summed over the
 * shots of each joint pattern of two groups of four sites, then over the patterns with one or two bits set.
 * 32 replicates at a time, eight in a vector. Counts of one call stay below 65 536.
 */

/** Bytes of one pattern's 32 sums, 16 bits each. */
const SUMS: usize = 64;

/** Sums the rows [32] named by `list` over each of its patterns into `sums` [pattern][32], u16. */
export function sumPatterns(list: usize, sums: usize): void {
  let at = list + 1024;
  for (let entry = list; entry < list + 1024; entry += 4) {
    const head = load<u32>(entry);
    let quads = head >> 8;
    let a = i16x8.splat(0);
    let b = i16x8.splat(0);
    let c = i16x8.splat(0);
    let d = i16x8.splat(0);
    while (quads) {
      let p0 = usize(load<u32>(at));
      let p1 = usize(load<u32>(at, 4));
      let p2 = usize(load<u32>(at, 8));
      let p3 = usize(load<u32>(at, 12));
      let left = sum4Bytes(v128.load(p0), v128.load(p1), v128.load(p2), v128.load(p3));
      let right = sum4Bytes(v128.load(p0, 16), v128.load(p1, 16), v128.load(p2, 16), v128.load(p3, 16));
      at += 16;
      if (--quads) {
        p0 = usize(load<u32>(at));
        p1 = usize(load<u32>(at, 4));
        p2 = usize(load<u32>(at, 8));
        p3 = usize(load<u32>(at, 12));
        left = i8x16.add(left, sum4Bytes(v128.load(p0), v128.load(p1), v128.load(p2), v128.load(p3)));
        right = i8x16.add(right, sum4Bytes(v128.load(p0, 16), v128.load(p1, 16), v128.load(p2, 16), v128.load(p3, 16)));
        at += 16;
        quads--;
      }
      a = i16x8.add(a, i16x8.extend_low_i8x16_u(left));
      b = i16x8.add(b, i16x8.extend_high_i8x16_u(left));
      c = i16x8.add(c, i16x8.extend_low_i8x16_u(right));
      d = i16x8.add(d, i16x8.extend_high_i8x16_u(right));
    }
    const out = sums + usize(head & 255) * SUMS;
    v128.store(out, a);
    v128.store(out, b, 16);
    v128.store(out, c, 32);
    v128.store(out, d, 48);
  }
}

// @ts-ignore: decorator
@inline
function sum4Bytes(a: v128, b: v128, c: v128, d: v128): v128 {
  return i8x16.add(i8x16.add(a, b), i8x16.add(c, d));
}

/**
 * From the pattern sums, the counts "both up" of the 16 pairs of one site a of the first group and one b of the second,
 * row 4 a + b of `pairRows`; and, when `ownRows` is not 0, of the second group's own four sites and six pairs
 * (01 02 03 12 13 23). Rows are `rowBytes` apart, i32 a replicate; `keep` is −1 to add to what the rows hold, 0 to
 * overwrite. `scratch` holds 80 vectors.
 */
export function countJointly(
  sums: usize, pairRows: usize, ownRows: usize, rowBytes: usize, block: u32, keep: i32, scratch: usize,
): void {
  const mask = i32x4.splat(keep);
  for (let part: usize = 0; part < 4; part++) {
    const column = (usize(block) << 7) + (part << 5);
    for (let b: usize = 0; b < 16; b++) {
      upSums(sums + b * 16 * SUMS + (part << 4), SUMS, scratch + (b << 4), 256);
    }
    for (let a: usize = 0; a < 4; a++) {
      const found = scratch + 5 * 256;
      upSums(scratch + a * 256, 16, found, 16);
      const rows = pairRows + a * 4 * rowBytes + column;
      for (let b: usize = 0; b < 4; b++) addCounts(rows + b * rowBytes, v128.load(found + (b << 4)), mask);
    }
    if (ownRows) countOwn(scratch + 4 * 256, ownRows + column, rowBytes, mask, scratch + 5 * 256);
  }
}

/** Of 16 vectors, the sums of those whose index has bit 0, 1, 2, 3 set, and of all: five vectors `outStride` apart. */
// @ts-ignore: decorator
@inline
function upSums(from: usize, stride: usize, out: usize, outStride: usize): void {
  const e1 = v128.load(from + stride);
  const e3 = v128.load(from + 3 * stride);
  const e5 = v128.load(from + 5 * stride);
  const e7 = v128.load(from + 7 * stride);
  const e9 = v128.load(from + 9 * stride);
  const e11 = v128.load(from + 11 * stride);
  const e13 = v128.load(from + 13 * stride);
  const e15 = v128.load(from + 15 * stride);
  v128.store(out, i16x8.add(sum4(e1, e3, e5, e7), sum4(e9, e11, e13, e15)));
  const r1 = i16x8.add(v128.load(from + 2 * stride), e3);
  const r3 = i16x8.add(v128.load(from + 6 * stride), e7);
  const r5 = i16x8.add(v128.load(from + 10 * stride), e11);
  const r7 = i16x8.add(v128.load(from + 14 * stride), e15);
  v128.store(out + outStride, sum4(r1, r3, r5, r7));
  const q0 = i16x8.add(i16x8.add(v128.load(from), e1), r1);
  const q1 = i16x8.add(i16x8.add(v128.load(from + 4 * stride), e5), r3);
  const q2 = i16x8.add(i16x8.add(v128.load(from + 8 * stride), e9), r5);
  const q3 = i16x8.add(i16x8.add(v128.load(from + 12 * stride), e13), r7);
  v128.store(out + 2 * outStride, i16x8.add(q1, q3));
  const upper = i16x8.add(q2, q3);
  v128.store(out + 3 * outStride, upper);
  v128.store(out + 4 * outStride, i16x8.add(i16x8.add(q0, q1), upper));
}

// @ts-ignore: decorator
@inline
function sum4(a: v128, b: v128, c: v128, d: v128): v128 {
  return i16x8.add(i16x8.add(a, b), i16x8.add(c, d));
}

// @ts-ignore: decorator
@inline
function addCounts(at: usize, counts: v128, mask: v128): void {
  v128.store(at, i32x4.add(v128.and(v128.load(at), mask), i32x4.extend_low_i16x8_u(counts)));
  v128.store(at, i32x4.add(v128.and(v128.load(at, 16), mask), i32x4.extend_high_i16x8_u(counts)), 16);
}

function countOwn(totals: usize, rows: usize, rowBytes: usize, mask: v128, scratch: usize): void {
  upSums(totals, 16, scratch, 16);
  for (let b: usize = 0; b < 4; b++) addCounts(rows + b * rowBytes, v128.load(scratch + (b << 4)), mask);
  const pairs = rows + 4 * rowBytes;
  addCounts(pairs, atFour(totals, 3, 7, 11, 15), mask);
  addCounts(pairs + rowBytes, atFour(totals, 5, 7, 13, 15), mask);
  addCounts(pairs + 2 * rowBytes, atFour(totals, 9, 11, 13, 15), mask);
  addCounts(pairs + 3 * rowBytes, atFour(totals, 6, 7, 14, 15), mask);
  addCounts(pairs + 4 * rowBytes, atFour(totals, 10, 11, 14, 15), mask);
  addCounts(pairs + 5 * rowBytes, atFour(totals, 12, 13, 14, 15), mask);
}

// @ts-ignore: decorator
@inline
function atFour(from: usize, a: usize, b: usize, c: usize, d: usize): v128 {
  return sum4(v128.load(from + (a << 4)), v128.load(from + (b << 4)), v128.load(from + (c << 4)), v128.load(from + (d << 4)));
}
