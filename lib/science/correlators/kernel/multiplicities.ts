/**
 * How often each shot is drawn in 32 bootstrap replicates at once: independent Poisson(0.978) draws of a byte each,
 * completed to exactly M shots a replicate. docs/validation.md shows that this is the plain bootstrap.
 */
import { philoxAcrossLanes, secondRoundFactor, secondRoundHigh, secondRoundLow } from "./philox-simd";
import { nextBelow, nextWord, startRepairStreams } from "./repair-stream";

/** Bytes of one shot's row: one byte for each replicate of a block. */
const ROW: usize = 32;
/** The largest signed bytes that give 0, 1, 2 and 3; those above SURE are drawn again, finer. */
const LAST_0: i8 = -33;
const LAST_1: i8 = 61;
const LAST_2: i8 = 107;
const LAST_3: i8 = 122;
const SURE: i8 = 125;
/** Eight rows are summed in bytes elsewhere, so no multiplicity may pass 31; that has a chance below 1e-30 a draw. */
const LARGEST: u8 = 31;

/**
 * Writes the multiplicities of replicates 32 · block … 32 · block + 31 to `weights` [shot][32], bytes. `fineTable`
 * holds 16 limits of the finer draw; `scratch` 32 · 80 + 256 bytes.
 */
export function drawMultiplicities(
  weights: usize, shots: u32, block: u32, time: u32, purpose: u32, repairPurpose: u32, key0: u32, key1: u32,
  fineTable: usize, scratch: usize,
): void {
  startRepairStreams(scratch, block << 5, time, repairPurpose, key0, key1);
  const quads = i32x4.add(i32x4.splat(block << 3), i32x4(0, 1, 2, 3));
  const leftFactor = secondRoundFactor(quads, time, key0);
  const rightFactor = secondRoundFactor(i32x4.add(quads, i32x4.splat(4)), time, key0);
  const leftHigh = secondRoundHigh(leftFactor);
  const leftLow = secondRoundLow(leftFactor);
  const rightHigh = secondRoundHigh(rightFactor);
  const rightLow = secondRoundLow(rightFactor);
  for (let s: u32 = 0; s < shots; s += 4) {
    const rows = weights + usize(s) * ROW;
    philoxAcrossLanes(leftHigh, leftLow, s >> 2, time, purpose, key0, key1, rows, ROW);
    philoxAcrossLanes(rightHigh, rightLow, s >> 2, time, purpose, key0, key1, rows + 16, ROW);
    const end = rows + usize(min<u32>(4, shots - s)) * ROW;
    let unsure = i8x16.splat(0);
    for (let row = rows; row < end; row += 16) unsure = v128.or(unsure, i8x16.gt_s(v128.load(row), i8x16.splat(SURE)));
    if (v128.any_true(unsure)) convertWithCare(rows, end, fineTable);
    else for (let row = rows; row < end; row += 16) v128.store(row, fromBytes(v128.load(row)));
  }
  completeBlock(weights, shots, scratch + 32 * 80);
}

// @ts-ignore: decorator
@inline
function fromBytes(bytes: v128): v128 {
  const upTo2 = i8x16.add(
    i8x16.add(i8x16.gt_s(bytes, i8x16.splat(LAST_0)), i8x16.gt_s(bytes, i8x16.splat(LAST_1))),
    i8x16.gt_s(bytes, i8x16.splat(LAST_2)),
  );
  return i8x16.sub(i8x16.splat(0), i8x16.add(upTo2, i8x16.gt_s(bytes, i8x16.splat(LAST_3))));
}

function convertWithCare(rows: usize, end: usize, fineTable: usize): void {
  for (let row = rows; row < end; row += 16) {
    const bytes = v128.load(row);
    let unsure: u32 = i8x16.bitmask(i8x16.gt_s(bytes, i8x16.splat(SURE)));
    v128.store(row, fromBytes(bytes));
    while (unsure) {
      const lane = ctz(unsure);
      unsure &= unsure - 1;
      const word = nextWord(u32((row - rows) & 16) + lane);
      let value: u8 = 0;
      while (value < 15 && word >= load<u32>(fineTable + (usize(value) << 2))) value++;
      store<u8>(row + lane, value);
    }
  }
}

/** Adds or removes single shots until each replicate holds exactly `shots`; `totals` holds 32 u32 and 32 bytes. */
function completeBlock(weights: usize, shots: u32, totals: usize): void {
  sumRows(weights, shots, totals);
  for (let r: u32 = 0; r < 32; r++) {
    let total = load<u32>(totals + (usize(r) << 2));
    const column = weights + r;
    for (; total < shots; total++) {
      const cell = column + usize(nextBelow(r, shots)) * ROW;
      const value = load<u8>(cell);
      if (value == LARGEST) unreachable();
      store<u8>(cell, value + 1);
    }
    const cap = u32(load<u8>(totals + 128 + r));
    while (total > shots) {
      const ball = nextBelow(r, shots * cap);
      const cell = column + usize(ball / cap) * ROW;
      const value = load<u8>(cell);
      if (ball % cap < u32(value)) {
        store<u8>(cell, value - 1);
        total--;
      }
    }
  }
}

/** Each replicate's sum (32 u32) and largest multiplicity (32 bytes) over the rows. */
function sumRows(weights: usize, shots: u32, totals: usize): void {
  memory.fill(totals, 0, 128);
  let largestLeft = i8x16.splat(0);
  let largestRight = i8x16.splat(0);
  const end = weights + usize(shots) * ROW;
  for (let from = weights; from < end; from += 8 * ROW) {
    let left = i8x16.splat(0);
    let right = i8x16.splat(0);
    const to = min(from + 8 * ROW, end);
    for (let row = from; row < to; row += ROW) {
      const a = v128.load(row);
      const b = v128.load(row, 16);
      left = i8x16.add(left, a);
      right = i8x16.add(right, b);
      largestLeft = i8x16.max_u(largestLeft, a);
      largestRight = i8x16.max_u(largestRight, b);
    }
    addBytes(totals, left);
    addBytes(totals + 64, right);
  }
  v128.store(totals, largestLeft, 128);
  v128.store(totals, largestRight, 144);
}

// @ts-ignore: decorator
@inline
function addBytes(totals: usize, bytes: v128): void {
  const low = i16x8.extend_low_i8x16_u(bytes);
  const high = i16x8.extend_high_i8x16_u(bytes);
  v128.store(totals, i32x4.add(v128.load(totals), i32x4.extend_low_i16x8_u(low)));
  v128.store(totals, i32x4.add(v128.load(totals, 16), i32x4.extend_high_i16x8_u(low)), 16);
  v128.store(totals, i32x4.add(v128.load(totals, 32), i32x4.extend_low_i16x8_u(high)), 32);
  v128.store(totals, i32x4.add(v128.load(totals, 48), i32x4.extend_high_i16x8_u(high)), 48);
}
