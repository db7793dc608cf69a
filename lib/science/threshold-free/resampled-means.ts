import { BLOCK_REPLICATES } from "@/lib/science/correlators/bootstrap-layout";
import { drawBlock, prepareJointBootstrap, type JointBootstrap } from "@/lib/science/correlators/joint-bootstrap";
import { wordsPerSite } from "@/lib/science/correlators/packed-spins";
import { weightingKernel } from "@/lib/science/threshold-free/weighting-kernel";

/** Which resamples of one evolution time: the same shots as the thresholded bootstrap's under the same numbers. */
export interface ResampledShots {
  shots: number;
  replicates: number;
  seed: number;
  blockLength: number;
  timeIndex: number;
}

/** Rows of the compiled sums come in fours. */
const ROWS_AT_ONCE = 4;
/** Rows held in memory at a time stay below this. */
const TILE_BYTES = 16 * 2 ** 20;
const SCRATCH_BYTES = 16384;
const DOUBLE = 8;

/**
 * Returns the mean of each row's readings over every replicate's shots, `[row][replicate]`. `writeRow` fills the readings `[shot]` of a row
 * into the array it is given, zeros before; it is asked for one row after the other.
 */
export function resampledMeans(which: ResampledShots, rows: number, writeRow: (row: number, readings: Float64Array) => void): Float64Array {
  const means = new Float64Array(rows * which.replicates);
  const draws = prepareDraws(which);
  const step = ROWS_AT_ONCE * Math.max(1, Math.floor(TILE_BYTES / (ROWS_AT_ONCE * which.shots * DOUBLE)));
  for (let first = 0; first < rows; first += step) {
    const held = Math.min(step, rows - first);
    addTile(which, draws, held, (row, readings) => writeRow(first + row, readings), means.subarray(first * which.replicates));
  }
  return means;
}

/** The draws depend on the number of shots alone, so the readings they are prepared with are two sites that never flip. */
function prepareDraws({ shots, replicates, seed, blockLength, timeIndex }: ResampledShots): JointBootstrap {
  const spins = { shots, sites: 2, words: new Uint32Array(2 * wordsPerSite(shots)) };
  return prepareJointBootstrap({ spins, readout: null, replicates, seed, blockLength, timeIndex, needed: new Uint8Array(1), traceCount: 0 });
}

function addTile(
  { shots, replicates }: ResampledShots,
  draws: JointBootstrap,
  rows: number,
  writeRow: (row: number, readings: Float64Array) => void,
  means: Float64Array,
): void {
  const padded = ROWS_AT_ONCE * Math.ceil(rows / ROWS_AT_ONCE);
  const rowsAt = SCRATCH_BYTES;
  const sumsAt = rowsAt + padded * shots * DOUBLE;
  const weightsAt = sumsAt + padded * BLOCK_REPLICATES * DOUBLE;
  const kernel = weightingKernel(weightsAt + shots * BLOCK_REPLICATES);
  const memory = kernel.memory.buffer;
  const readings = new Float64Array(memory, rowsAt, padded * shots).fill(0);
  for (let row = 0; row < rows; row++) writeRow(row, readings.subarray(row * shots, (row + 1) * shots));
  const sums = new Float64Array(memory, sumsAt, padded * BLOCK_REPLICATES);
  const weights = new Uint8Array(memory, weightsAt, shots * BLOCK_REPLICATES);
  const drawn = new Uint8Array(draws.kernel.memory.buffer, draws.layout.weights, shots * BLOCK_REPLICATES);
  for (let block = 0; block < draws.layout.blocks; block++) {
    drawBlock(draws, block);
    weights.set(drawn);
    sums.fill(0);
    kernel.addWeighted(weightsAt, rowsAt, shots, padded, sumsAt, 0);
    const first = block * BLOCK_REPLICATES;
    const held = Math.min(BLOCK_REPLICATES, replicates - first);
    for (let row = 0; row < rows; row++) {
      for (let b = 0; b < held; b++) means[row * replicates + first + b] = sums[row * BLOCK_REPLICATES + b] / shots;
    }
  }
}
