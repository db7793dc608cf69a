import { readFileSync } from "node:fs";
import { inflateRawSync } from "node:zlib";

/** Counts `[time][shot][site]` and times of a surrogate run, in memory that threads share. */
export interface SurrogateRun {
  counts: SharedArrayBuffer;
  times_us: Float64Array;
  shots: number;
  sites: number;
}

const CENTRAL_ENTRY = 0x02014b50;

/** Reads `counts` (uint16) and `times_us` (float64) from an NPZ file as the baseline script writes it. */
export function readSurrogateRun(path: string): SurrogateRun {
  const zip = readFileSync(path);
  const counts = readArray(zip, "counts.npy");
  const times = readArray(zip, "times_us.npy");
  const shared = new SharedArrayBuffer(counts.bytes.length);
  new Uint8Array(shared).set(counts.bytes);
  const times_us = new Float64Array(times.shape[0]);
  new Uint8Array(times_us.buffer).set(times.bytes);
  return { counts: shared, times_us, shots: counts.shape[1], sites: counts.shape[2] };
}

function readArray(zip: Buffer, name: string): { shape: number[]; bytes: Buffer } {
  const npy = inflateRawSync(compressedMember(zip, name));
  const headerEnd = 10 + npy.readUInt16LE(8);
  const shape = /'shape': \(([^)]*)\)/.exec(npy.toString("latin1", 10, headerEnd));
  if (shape === null) throw new Error(`${name} has no shape`);
  const sizes = shape[1].split(",").filter((size) => size.trim() !== "");
  return { shape: sizes.map(Number), bytes: npy.subarray(headerEnd) };
}

function compressedMember(zip: Buffer, name: string): Buffer {
  let at = zip.readUInt32LE(zip.lastIndexOf(Buffer.from([0x50, 0x4b, 0x05, 0x06])) + 16);
  while (zip.readUInt32LE(at) === CENTRAL_ENTRY) {
    const nameLength = zip.readUInt16LE(at + 28);
    if (zip.toString("latin1", at + 46, at + 46 + nameLength) === name) {
      const local = zip.readUInt32LE(at + 42);
      const data = local + 30 + zip.readUInt16LE(local + 26) + zip.readUInt16LE(local + 28);
      return zip.subarray(data, data + zip.readUInt32LE(at + 20));
    }
    at += 46 + nameLength + zip.readUInt16LE(at + 30) + zip.readUInt16LE(at + 32);
  }
  throw new Error(`${name} is not in the archive`);
}
