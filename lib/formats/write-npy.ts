const MAGIC = [0x93, 0x4e, 0x55, 0x4d, 0x50, 0x59, 1, 0];
const ALIGNMENT = 64;

/** An array to be written: `values` in C order for `shape`. */
export interface PlainArray {
  shape: number[];
  values: Uint8Array | Uint16Array | Int32Array | Float32Array | Float64Array;
}

/** Returns the bytes of an NPY file, format version 1.0, little-endian. Throws when shape and values do not agree. */
export function writeNpy({ shape, values }: PlainArray): Uint8Array {
  if (shape.reduce((product, length) => product * length, 1) !== values.length) throw new Error(`Shape ${shape} for ${values.length} values`);
  const sizes = shape.length === 1 ? `${shape[0]},` : shape.join(", ");
  const dict = `{'descr': '${dtypeOf(values)}', 'fortran_order': False, 'shape': (${sizes}), }`;
  const offset = Math.ceil((MAGIC.length + 2 + dict.length + 1) / ALIGNMENT) * ALIGNMENT;
  const bytes = new Uint8Array(offset + values.byteLength);
  bytes.set(MAGIC);
  new DataView(bytes.buffer).setUint16(MAGIC.length, offset - MAGIC.length - 2, true);
  bytes.set(new TextEncoder().encode(`${dict.padEnd(offset - MAGIC.length - 3)}\n`), MAGIC.length + 2);
  // Every platform this runs on is little-endian, as typed arrays are.
  bytes.set(new Uint8Array(values.buffer, values.byteOffset, values.byteLength), offset);
  return bytes;
}

function dtypeOf(values: PlainArray["values"]): string {
  if (values instanceof Uint8Array) return "|u1";
  if (values instanceof Uint16Array) return "<u2";
  if (values instanceof Int32Array) return "<i4";
  return values instanceof Float32Array ? "<f4" : "<f8";
}
