/** Builds NPY bytes by hand, for dtypes, orders and versions that the product never writes. */
export interface HandMadeArray {
  descr: string;
  shape: number[];
  /** In C order. */
  values: number[];
  fortranOrder?: boolean;
  version?: 1 | 2 | 3;
}

export function npyBytes({ descr, shape, values, fortranOrder = false, version = 1 }: HandMadeArray): Uint8Array {
  const dict = `{'descr': '${descr}', 'fortran_order': ${fortranOrder ? "True" : "False"}, 'shape': (${shape.join(", ")},), }\n`;
  const start = version === 1 ? 10 : 12;
  const itemBytes = descr === "?" ? 1 : Number(descr.slice(2));
  const bytes = new Uint8Array(start + dict.length + values.length * itemBytes);
  const view = new DataView(bytes.buffer);
  bytes.set([0x93, 0x4e, 0x55, 0x4d, 0x50, 0x59, version, 0]);
  if (version === 1) view.setUint16(8, dict.length, true);
  else view.setUint32(8, dict.length, true);
  bytes.set(new TextEncoder().encode(dict), start);
  const ordered = fortranOrder ? fortran(values, shape) : values;
  ordered.forEach((value, n) => writeItem(view, start + dict.length + n * itemBytes, descr, value));
  return bytes;
}

function fortran(values: number[], shape: number[]): number[] {
  const out = new Array<number>(values.length);
  values.forEach((value, n) => {
    let rest = n;
    const indices = [...shape].reverse().map((length) => {
      const index = rest % length;
      rest = Math.floor(rest / length);
      return index;
    }).reverse();
    let at = 0;
    let step = 1;
    indices.forEach((index, axis) => {
      at += index * step;
      step *= shape[axis];
    });
    out[at] = value;
  });
  return out;
}

function writeItem(view: DataView, at: number, descr: string, value: number): void {
  const little = !descr.startsWith(">");
  const writers: Record<string, () => void> = {
    "?": () => view.setUint8(at, value), b1: () => view.setUint8(at, value), u1: () => view.setUint8(at, value), i1: () => view.setInt8(at, value),
    u2: () => view.setUint16(at, value, little), i2: () => view.setInt16(at, value, little), f2: () => view.setUint16(at, value, little),
    u4: () => view.setUint32(at, value, little), i4: () => view.setInt32(at, value, little), f4: () => view.setFloat32(at, value, little),
    u8: () => view.setBigUint64(at, BigInt(value), little), i8: () => view.setBigInt64(at, BigInt(value), little), f8: () => view.setFloat64(at, value, little),
  };
  writers[descr === "?" ? "?" : descr.slice(1)]();
}
