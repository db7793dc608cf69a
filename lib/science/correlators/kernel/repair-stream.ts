/** The words that complete a replicate: one Philox stream each, kept 16 words ahead, for the 32 replicates of a block. */
import { philoxAhead } from "./philox-simd";

/** Bytes a replicate: 16 words, then the words used and the next block's counter. */
const STREAM_BYTES: usize = 80;
const USED: usize = 64;
const COUNTER: usize = 68;
const WORDS_AHEAD: u32 = 16;
const BLOCKS_AHEAD: u32 = 4;

let streams: usize = 0;
let firstReplicate: u32 = 0;
let time: u32 = 0;
let purpose: u32 = 0;
let key0: u32 = 0;
let key1: u32 = 0;

/** Starts the streams of replicates first … first + 31; `memory` holds 32 · 80 bytes, aligned to 16. */
export function startRepairStreams(memory: usize, first: u32, index: u32, use: u32, low: u32, high: u32): void {
  streams = memory;
  firstReplicate = first;
  time = index;
  purpose = use;
  key0 = low;
  key1 = high;
  for (let r: usize = 0; r < 32; r++) {
    store<u32>(streams + r * STREAM_BYTES, WORDS_AHEAD, USED);
    store<u32>(streams + r * STREAM_BYTES, 0, COUNTER);
  }
}

/** The next word of the block's replicate r. */
// @ts-ignore: decorator
@inline
export function nextWord(r: u32): u32 {
  const stream = streams + usize(r) * STREAM_BYTES;
  let used = load<u32>(stream, USED);
  if (used == WORDS_AHEAD) {
    refill(stream, r);
    used = 0;
  }
  store<u32>(stream, used + 1, USED);
  return load<u32>(stream + (usize(used) << 2));
}

function refill(stream: usize, r: u32): void {
  const counter = load<u32>(stream, COUNTER);
  philoxAhead(counter, firstReplicate + r, time, purpose, key0, key1, stream);
  store<u32>(stream, counter + BLOCKS_AHEAD, COUNTER);
}

/** A whole number in 0 … bound − 1, each equally likely (Lemire 2019). */
// @ts-ignore: decorator
@inline
export function nextBelow(r: u32, bound: u32): u32 {
  let product = u64(nextWord(r)) * u64(bound);
  if (u32(product) < bound) {
    const unfair: u32 = (0 - bound) % bound;
    while (u32(product) < unfair) product = u64(nextWord(r)) * u64(bound);
  }
  return u32(product >> 32);
}
