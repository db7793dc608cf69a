import type { NpyHeader } from "@/lib/formats/npy-header";

/** Reads one number at a byte offset. */
export type ItemReader = (view: DataView, at: number) => number;

/** Returns the reader for an array's items; 64-bit integers beyond 2^53 lose their last digits. */
export function itemReader({ kind, itemBytes, littleEndian: little }: NpyHeader): ItemReader {
  const readers: Record<string, ItemReader> = {
    b1: (view, at) => (view.getUint8(at) === 0 ? 0 : 1),
    u1: (view, at) => view.getUint8(at),
    i1: (view, at) => view.getInt8(at),
    u2: (view, at) => view.getUint16(at, little),
    i2: (view, at) => view.getInt16(at, little),
    u4: (view, at) => view.getUint32(at, little),
    i4: (view, at) => view.getInt32(at, little),
    u8: (view, at) => Number(view.getBigUint64(at, little)),
    i8: (view, at) => Number(view.getBigInt64(at, little)),
    f2: (view, at) => fromHalf(view.getUint16(at, little)),
    f4: (view, at) => view.getFloat32(at, little),
    f8: (view, at) => view.getFloat64(at, little),
  };
  return readers[`${kind}${itemBytes}`];
}

/** Returns the value of a binary16 number (IEEE 754). */
function fromHalf(bits: number): number {
  const sign = bits & 0x8000 ? -1 : 1;
  const exponent = (bits >>> 10) & 31;
  const fraction = bits & 1023;
  if (exponent === 0) return sign * fraction * 2 ** -24;
  if (exponent === 31) return fraction === 0 ? sign * Infinity : NaN;
  return sign * (1024 + fraction) * 2 ** (exponent - 25);
}
