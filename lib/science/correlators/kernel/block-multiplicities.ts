/** How often each shot is drawn when runs of consecutive shots are resampled together: the circular block bootstrap. */
import { nextBelow, startRepairStreams } from "./repair-stream";

/** Bytes of one shot's row: one byte for each replicate of a block of replicates. */
const ROW: usize = 32;
/** Eight rows are summed in bytes elsewhere; more than 31 runs over one shot have a chance below 1e-30. */
const LARGEST: u8 = 31;

/**
 * Writes the multiplicities of replicates 32 · block … 32 · block + 31 to `weights` [shot][32], bytes. Each replicate holds ⌈M/length⌉
 * runs of `length` shots that start anywhere and go on at the first shot after the last; the last run is cut so that M are held.
 * `scratch` holds 2 560 bytes.
 */
export function drawRuns(
  weights: usize, shots: u32, length: u32, block: u32, time: u32, purpose: u32, key0: u32, key1: u32, scratch: usize,
): void {
  memory.fill(weights, 0, usize(shots) * ROW);
  startRepairStreams(scratch, block << 5, time, purpose, key0, key1);
  for (let r: u32 = 0; r < 32; r++) {
    for (let held: u32 = 0; held < shots; held += length) {
      const start = nextBelow(r, shots);
      const end = start + min(length, shots - held);
      raise(weights + r, start, min(end, shots));
      if (end > shots) raise(weights + r, 0, end - shots);
    }
  }
}

// @ts-ignore: decorator
@inline
function raise(column: usize, first: u32, end: u32): void {
  for (let s = first; s < end; s++) {
    const cell = column + usize(s) * ROW;
    const value = load<u8>(cell);
    if (value == LARGEST) unreachable();
    store<u8>(cell, value + 1);
  }
}
