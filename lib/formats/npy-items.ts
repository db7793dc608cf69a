import type { NpyHeader } from "@/lib/formats/npy-header";

/** Reads one number at a byte offset. */
type ItemReader = (view: DataView, at: number) => number;

type NativeItems = Uint8Array | Uint16Array | Int16Array | Uint32Array | Int32Array | Float32Array | Float64Array;
type NativeKind = new (buffer: ArrayBufferLike, byteOffset: number, length: number) => NativeItems;

/** The kinds that typed arrays hold as they stand (every platform this runs on is little-endian). */
const NATIVE_KINDS = new Map<string, NativeKind>([
  ["u1", Uint8Array], ["u2", Uint16Array], ["i2", Int16Array], ["u4", Uint32Array], ["i4", Int32Array], ["f4", Float32Array], ["f8", Float64Array],
]);

/** Returns the first `count` numbers in `bytes`, which start with a number of the array; 64-bit integers beyond 2^53 lose their last digits. */
export function itemsAt(header: NpyHeader, bytes: Uint8Array, count: number): Float64Array {
  const native = nativeItems(header, bytes, count);
  if (native !== null) return new Float64Array(native);
  const read = itemReader(header);
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const values = new Float64Array(count);
  for (let n = 0, at = 0; n < count; n++, at += header.itemBytes) values[n] = read(view, at);
  return values;
}

/** Returns the numbers as the platform's own typed array, or null when order, kind or alignment do not allow it. */
function nativeItems({ kind, itemBytes, littleEndian }: NpyHeader, bytes: Uint8Array, count: number): NativeItems | null {
  const Native = NATIVE_KINDS.get(`${kind}${itemBytes}`);
  if (Native === undefined || !littleEndian || bytes.byteOffset % itemBytes !== 0) return null;
  return new Native(bytes.buffer, bytes.byteOffset, count);
}

function itemReader({ kind, itemBytes, littleEndian: little }: NpyHeader): ItemReader {
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
