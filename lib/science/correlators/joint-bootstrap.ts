import { bootstrapKernel, type BootstrapKernel } from "@/lib/science/correlators/bootstrap-kernel";
import {
  GROUP_SITES,
  groupCount,
  layOutBootstrap,
  OWN_ROWS,
  PAIR_ROWS,
  type BootstrapLayout,
} from "@/lib/science/correlators/bootstrap-layout";
import { groupPairsFor, type GroupPair } from "@/lib/science/correlators/group-pairs";
import { fineDrawLimits } from "@/lib/science/correlators/multiplicity-law";
import { wordsPerSite, type PackedSpins } from "@/lib/science/correlators/packed-spins";
import { pairIndex } from "@/lib/science/correlators/pairs";
import type { ReadoutCorrection } from "@/lib/science/correlators/readout-correction";
import { seedKey } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";

/** A bootstrap of whole shots at one evolution time, in the kernel's memory. */
export interface JointBootstrap {
  kernel: BootstrapKernel;
  layout: BootstrapLayout;
  groupPairs: GroupPair[];
  /** `[pair]`, 1 where replicates are asked for. */
  needed: Uint8Array;
  blockLength: number;
  timeIndex: number;
  key0: number;
  key1: number;
}

/** What a bootstrap of one evolution time depends on. */
export interface BootstrapTask {
  spins: PackedSpins;
  readout: ReadoutCorrection | null;
  replicates: number;
  seed: number;
  /** Consecutive shots that are resampled together, around the end; 1 resamples single shots. */
  blockLength: number;
  timeIndex: number;
  /** `[pair]`, 1 where replicates are asked for. */
  needed: Uint8Array;
  traceCount: number;
}

/** A pair whose replicates can be read: offsets of its i32 row of shots with both sites up, `[replicate]`. */
export interface CountedPair {
  i: number;
  j: number;
  pair: number;
  bothUp: number;
}

const OWN_PAIRS = [
  [0, 1],
  [0, 2],
  [0, 3],
  [1, 2],
  [1, 3],
  [2, 3],
] as const;

/**
 * Prepares resamples of whole shots, drawn by (seed, timeIndex, replicate) alone, whichever pairs are asked for. `traceCount` rows
 * of replicate values, set to 0, are laid out with them. Uses the thread's kernel: one bootstrap at a time in a thread.
 */
export function prepareJointBootstrap({ spins, readout, replicates, seed, blockLength, timeIndex, needed, traceCount }: BootstrapTask): JointBootstrap {
  const groupPairs = groupPairsFor(spins.sites, groupCount(spins.sites), needed);
  const layout = layOutBootstrap(spins.shots, spins.sites, replicates, groupPairs.length, traceCount);
  const kernel = bootstrapKernel(layout.bytes);
  const memory = kernel.memory.buffer;
  const readings = new Uint32Array(memory, layout.words, layout.groups * GROUP_SITES * wordsPerSite(spins.shots));
  readings.fill(0).set(spins.words);
  new Uint32Array(memory, layout.fineTable, 16).set(fineDrawLimits());
  new Uint8Array(memory, layout.emptyRow, 32).fill(0);
  new Float64Array(memory, layout.traces, (traceCount * layout.valueBytes) / 8).fill(0);
  writeReadout(new Float64Array(memory), layout, readout);
  for (let g = 0; g < layout.groups; g++) {
    const words = layout.words + g * GROUP_SITES * wordsPerSite(spins.shots) * 4;
    kernel.readGroup(words, wordsPerSite(spins.shots), spins.shots, layout.nibbles + g * spins.shots);
  }
  return { kernel, layout, groupPairs, needed, blockLength, timeIndex, ...seedKey(seed) };
}

function writeReadout(memory: Float64Array, layout: BootstrapLayout, readout: ReadoutCorrection | null): void {
  const { replicates, sites, valueBytes } = layout;
  for (let i = 0; i < sites; i++) {
    const factors = memory.subarray((layout.factors + i * valueBytes) / 8).subarray(0, valueBytes / 8);
    const offsets = memory.subarray((layout.offsets + i * valueBytes) / 8).subarray(0, valueBytes / 8);
    factors.fill(readout === null ? 1 : readout.inverseFactor[i]);
    offsets.fill(readout === null ? 0 : readout.offset[i]);
    if (readout === null || readout.replicates === null) continue;
    factors.set(readout.replicates.inverseFactor.subarray(i * replicates, (i + 1) * replicates));
    offsets.set(readout.replicates.offset.subarray(i * replicates, (i + 1) * replicates));
  }
}

/**
 * Counts all replicates of the needed pairs, and calls `onPairs` with those that can be read until it returns. The counts of their
 * sites (`siteRow`) can be read from the first call on. Where memory is short it draws the same replicates again.
 */
export function countReplicates(run: JointBootstrap, onPairs: (pairs: CountedPair[]) => void): void {
  const { groupPairs, layout, needed } = run;
  const step = layout.groupPairsPerTile;
  for (let first = 0; first < groupPairs.length; first += step) {
    const tile = groupPairs.slice(first, first + step);
    countTile(run, tile);
    onPairs(pairsOfTile(layout, tile).filter(({ pair }) => needed[pair] === 1));
  }
}

/** Returns the offset of a site's row of shots up, `[replicate]` i32. */
export function siteRow(layout: BootstrapLayout, i: number): number {
  const group = Math.floor(i / GROUP_SITES);
  return layout.ownRows + (group * OWN_ROWS + (i % GROUP_SITES)) * layout.rowBytes;
}

function countTile(run: JointBootstrap, tile: readonly GroupPair[]): void {
  const { layout } = run;
  listShots(run, tile);
  for (let block = 0; block < layout.blocks; block++) {
    drawBlock(run, block);
    tile.forEach((pair, slot) => countGroupPair(run, pair, slot, block));
  }
}

/** Draws how often each shot is in replicates 32 · block … 32 · block + 31, bytes `[shot][32]` at `layout.weights`. */
export function drawBlock({ kernel, layout, blockLength, timeIndex, key0, key1 }: JointBootstrap, block: number): void {
  const { bootstrapShots, bootstrapRepairs, bootstrapRuns } = RANDOM_PURPOSES;
  const { weights, shots, fineTable, scratch } = layout;
  if (blockLength > 1) {
    kernel.drawRuns(weights, shots, blockLength, block, timeIndex, bootstrapRuns, key0, key1, scratch);
    return;
  }
  kernel.drawMultiplicities(weights, shots, block, timeIndex, bootstrapShots, bootstrapRepairs, key0, key1, fineTable, scratch);
}

function listShots({ kernel, layout }: JointBootstrap, tile: readonly GroupPair[]): void {
  tile.forEach(({ a, b }, slot) => {
    layout.chunks.forEach(({ first, end }, chunk) => {
      const readingsA = layout.nibbles + a * layout.shots;
      const readingsB = layout.nibbles + b * layout.shots;
      const list = listAt(layout, slot, chunk);
      const { weights, emptyRow, scratch } = layout;
      kernel.listPatterns(readingsA, readingsB, first, end, weights, emptyRow, list, scratch);
    });
  });
}

function countGroupPair(run: JointBootstrap, pair: GroupPair, slot: number, block: number): void {
  const { kernel, layout } = run;
  const pairRows = layout.pairRows + slot * PAIR_ROWS * layout.rowBytes;
  const ownRows = pair.own ? layout.ownRows + pair.b * OWN_ROWS * layout.rowBytes : 0;
  for (let chunk = 0; chunk < layout.chunks.length; chunk++) {
    kernel.sumPatterns(listAt(layout, slot, chunk), layout.sums);
    const keep = chunk === 0 ? 0 : -1;
    kernel.countJointly(layout.sums, pairRows, ownRows, layout.rowBytes, block, keep, layout.scratch);
  }
}

function listAt(layout: BootstrapLayout, slot: number, chunk: number): number {
  return layout.lists + (slot * layout.chunks.length + chunk) * layout.listBytes;
}

function pairsOfTile(layout: BootstrapLayout, tile: readonly GroupPair[]): CountedPair[] {
  const pairs: CountedPair[] = [];
  const add = (i: number, j: number, bothUp: number) => {
    if (i < layout.sites && j < layout.sites) {
      const [low, high] = i < j ? [i, j] : [j, i];
      pairs.push({ i: low, j: high, pair: pairIndex(layout.sites, low, high), bothUp });
    }
  };
  tile.forEach(({ a, b, own, across }, slot) => {
    for (let row = 0; across && row < PAIR_ROWS; row++) {
      const bothUp = layout.pairRows + (slot * PAIR_ROWS + row) * layout.rowBytes;
      add(GROUP_SITES * a + (row >> 2), GROUP_SITES * b + (row & 3), bothUp);
    }
    if (!own) return;
    OWN_PAIRS.forEach(([p, q], n) => {
      const bothUp = layout.ownRows + (b * OWN_ROWS + GROUP_SITES + n) * layout.rowBytes;
      add(GROUP_SITES * b + p, GROUP_SITES * b + q, bothUp);
    });
  });
  return pairs;
}
