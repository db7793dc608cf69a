import { readFileSync } from "node:fs";
import { unzipSync } from "fflate";

/** One array of an NPZ file, C order, as numbers. */
export interface NpzArray {
  shape: number[];
  values: Float64Array;
}

const READERS: Record<string, { bytes: number; read: (view: DataView, at: number) => number }> = {
  "<u2": { bytes: 2, read: (view, at) => view.getUint16(at, true) },
  "<i4": { bytes: 4, read: (view, at) => view.getInt32(at, true) },
  "<f8": { bytes: 8, read: (view, at) => view.getFloat64(at, true) },
};

/** Reads fixture archives independently of the product's own readers. */
export function readNpz(path: string): Record<string, NpzArray> {
  const members = unzipSync(readFileSync(path));
  return Object.fromEntries(Object.entries(members).map(([name, bytes]) => [name.replace(".npy", ""), readNpy(bytes)]));
}

function readNpy(bytes: Uint8Array): NpzArray {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const start = 10 + view.getUint16(8, true);
  const header = new TextDecoder().decode(bytes.subarray(10, start));
  const kind = /'descr': '([^']*)'/.exec(header)?.[1] ?? "";
  const sizes = /'shape': \(([^)]*)\)/.exec(header)?.[1] ?? "";
  const reader = READERS[kind];
  if (reader === undefined) throw new Error(`Fixture of kind ${kind}`);
  const shape = sizes
    .split(",")
    .filter((size) => size.trim() !== "")
    .map(Number);
  const length = shape.reduce((product, size) => product * size, 1);
  return { shape, values: Float64Array.from({ length }, (_, n) => reader.read(view, start + n * reader.bytes)) };
}
