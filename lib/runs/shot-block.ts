import { promisify } from "node:util";
import { constants, deflateRaw, inflateRaw } from "node:zlib";

const deflate = promisify(deflateRaw);
const inflate = promisify(inflateRaw);

export type CountType = "uint16" | "float32";
export type Counts = Uint16Array | Float32Array;

/** Shots as a block keeps them. */
export interface ShotBlock {
  shots: number;
  sites: number;
  /** `[shot]` */
  shotNumbers: Float64Array;
  /** `[shot][site]` */
  counts: Counts;
}

export function countTypeOf(counts: Counts): CountType {
  return counts instanceof Uint16Array ? "uint16" : "float32";
}

/** Returns the block's bytes, deflated fast: counts repeat so much that a slower level gains little. */
export async function packBlock({ shotNumbers, counts }: ShotBlock): Promise<Buffer> {
  return deflate(Buffer.concat([bytesOf(shotNumbers), bytesOf(counts)]), { level: constants.Z_BEST_SPEED });
}

/** Returns the shots in a block's bytes. */
export async function unpackBlock(data: Uint8Array, shots: number, countType: CountType): Promise<ShotBlock> {
  const raw = await inflate(data);
  const numbers = raw.subarray(0, 8 * shots);
  const rest = raw.subarray(8 * shots);
  const counts = countType === "uint16" ? new Uint16Array(ownBuffer(rest)) : new Float32Array(ownBuffer(rest));
  return { shots, sites: counts.length / shots, shotNumbers: new Float64Array(ownBuffer(numbers)), counts };
}

function bytesOf(array: Float64Array | Counts): Uint8Array {
  return new Uint8Array(array.buffer, array.byteOffset, array.byteLength);
}

function ownBuffer(bytes: Uint8Array): ArrayBuffer {
  return Uint8Array.from(bytes).buffer;
}

/** Returns all shots of several blocks in order, as float32 when any of them has fractions. */
export function joinBlocks(blocks: ShotBlock[], sites: number): ShotBlock {
  const shots = blocks.reduce((sum, block) => sum + block.shots, 0);
  const whole = blocks.every(({ counts }) => counts instanceof Uint16Array);
  const joined: ShotBlock = {
    shots,
    sites,
    shotNumbers: new Float64Array(shots),
    counts: whole ? new Uint16Array(shots * sites) : new Float32Array(shots * sites),
  };
  let at = 0;
  for (const block of blocks) {
    joined.shotNumbers.set(block.shotNumbers, at);
    joined.counts.set(block.counts, at * sites);
    at += block.shots;
  }
  return joined;
}

/** Returns the block's shots by rising shot number. */
export function sortBlock({ shots, sites, shotNumbers, counts }: ShotBlock): ShotBlock {
  const order = Uint32Array.from({ length: shots }, (_, s) => s).sort((first, second) => shotNumbers[first] - shotNumbers[second]);
  const sorted: ShotBlock = { shots, sites, shotNumbers: new Float64Array(shots), counts: counts.slice() };
  order.forEach((from, to) => {
    sorted.shotNumbers[to] = shotNumbers[from];
    sorted.counts.set(counts.subarray(from * sites, (from + 1) * sites), to * sites);
  });
  return sorted;
}
