/**
 * How often each shot is drawn in 32 bootstrap replicates at once: independent Poisson(0.978) draws of a byte each,
 * completed to exactly M shots a replicate. docs/validation.md shows that this is the plain bootstrap.
 */
import { philoxStates } from "./philox-simd";
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
/** Shots drawn before their unsure bytes are drawn again; the list of those then stays in the nearest cache. */
const STRIP: u32 = 64;
const TOTALS: usize = 2560;
const UNSURE: usize = 2816;

/**
 * Writes the multiplicities of replicates 32 · block … 32 · block + 31 to `weights` [shot][32], bytes, with room for a
 * multiple of two shots. `fineTable` holds the 16 limits of the finer draw; `scratch` 11 264 bytes.
 * The bytes are those of eight xoshiro128** generators (Blackman and Vigna 2021), one for each four replicates, started from Philox.
 */
export function drawMultiplicities(
  weights: usize, shots: u32, block: u32, time: u32, purpose: u32, repairPurpose: u32, key0: u32, key1: u32,
  fineTable: usize, scratch: usize,
): void {
  const states = scratch + UNSURE;
  philoxStates(0, block, time, purpose, key0, key1, states);
  philoxStates(4, block, time, purpose, key0, key1, states + 64);
  let a0 = v128.load(states);
  let a1 = v128.load(states, 16);
  let a2 = v128.load(states, 32);
  let a3 = v128.load(states, 48);
  let b0 = v128.load(states, 64);
  let b1 = v128.load(states, 80);
  let b2 = v128.load(states, 96);
  let b3 = v128.load(states, 112);
  startRepairStreams(scratch, block << 5, time, repairPurpose, key0, key1);
  const unsure = scratch + UNSURE;
  for (let strip: u32 = 0; strip < shots; strip += STRIP) {
    const end = min(strip + STRIP, shots);
    let last = unsure;
    for (let s = strip; s < end; s += 2) {
      const rows = weights + usize(s) * ROW;
      let bits: u64 = 0;
      for (let row: usize = 0; row < 2; row++) {
        const left = scrambled(a1);
        const right = scrambled(b1);
        const aShifted = i32x4.shl(a1, 9);
        const bShifted = i32x4.shl(b1, 9);
        a2 = v128.xor(a2, a0);
        b2 = v128.xor(b2, b0);
        a3 = v128.xor(a3, a1);
        b3 = v128.xor(b3, b1);
        a1 = v128.xor(a1, a2);
        b1 = v128.xor(b1, b2);
        a0 = v128.xor(a0, a3);
        b0 = v128.xor(b0, b3);
        a2 = v128.xor(a2, aShifted);
        b2 = v128.xor(b2, bShifted);
        a3 = v128.or(i32x4.shl(a3, 11), i32x4.shr_u(a3, 21));
        b3 = v128.or(i32x4.shl(b3, 11), i32x4.shr_u(b3, 21));
        const at = rows + row * ROW;
        bits |= (u64(convert(left, at)) | (u64(convert(right, at + 16)) << 16)) << (row << 5);
      }
      last = listUnsure(bits, rows, last);
    }
    drawFiner(unsure, last, weights, weights + usize(shots) * ROW, fineTable);
  }
  completeBlock(weights, shots, scratch + TOTALS);
}

/** The output of xoshiro128**: rotl(5 s₁, 7) · 9, with shifts for the products. */
// @ts-ignore: decorator
@inline
function scrambled(s1: v128): v128 {
  const five = i32x4.add(i32x4.shl(s1, 2), s1);
  const turned = v128.or(i32x4.shl(five, 7), i32x4.shr_u(five, 25));
  return i32x4.add(i32x4.shl(turned, 3), turned);
}

/** Writes 16 random bytes as multiplicities; returns a bit for each that is not sure. */
// @ts-ignore: decorator
@inline
function convert(bytes: v128, at: usize): u32 {
  const upTo2 = i8x16.add(
    i8x16.add(i8x16.gt_s(bytes, i8x16.splat(LAST_0)), i8x16.gt_s(bytes, i8x16.splat(LAST_1))),
    i8x16.gt_s(bytes, i8x16.splat(LAST_2)),
  );
  v128.store(at, i8x16.neg(i8x16.add(upTo2, i8x16.gt_s(bytes, i8x16.splat(LAST_3)))));
  return i8x16.bitmask(i8x16.gt_s(bytes, i8x16.splat(SURE)));
}

/**
 * Appends the places of the set bits, of which two are written in any case: without a branch that depends on chance,
 * but for the one in a hundred that has more.
 */
// @ts-ignore: decorator
@inline
function listUnsure(bits: u64, rows: usize, list: usize): usize {
  const end = list + (usize(popcnt(bits)) << 2);
  store<u32>(list, u32(rows) + u32(ctz(bits)));
  bits &= bits - 1;
  store<u32>(list, u32(rows) + u32(ctz(bits)), 4);
  bits &= bits - 1;
  for (let at = list + 8; bits; at += 4) {
    store<u32>(at, u32(rows) + u32(ctz(bits)));
    bits &= bits - 1;
  }
  return end;
}

function drawFiner(list: usize, end: usize, weights: usize, weightsEnd: usize, fineTable: usize): void {
  const limits0 = v128.load(fineTable);
  const limits1 = v128.load(fineTable, 16);
  const limits2 = v128.load(fineTable, 32);
  const limits3 = v128.load(fineTable, 48);
  for (let at = list; at < end; at += 4) {
    const cell = usize(load<u32>(at));
    if (cell >= weightsEnd) break;
    const word = i32x4.splat(nextWord(u32(cell - weights) & 31));
    const low = i16x8.narrow_i32x4_s(i32x4.ge_u(word, limits0), i32x4.ge_u(word, limits1));
    const high = i16x8.narrow_i32x4_s(i32x4.ge_u(word, limits2), i32x4.ge_u(word, limits3));
    const passed = popcnt(i8x16.bitmask(i8x16.narrow_i16x8_s(low, high)));
    store<u8>(cell, u8(min<u32>(passed, 15)));
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
