import { invalidAt, isProblem, type Problem } from "@/lib/problem";

const MAGIC = [0x93, 0x4e, 0x55, 0x4d, 0x50, 0x59];
const LONGEST_HEADER_BYTES = 65_536;
/** Bytes from the start of an NPY file that always hold the header, if it is one that is taken. */
export const NPY_HEAD_BYTES = LONGEST_HEADER_BYTES + 12;

/** What an NPY file says of its array. */
export interface NpyHeader {
  /** The dtype's kind: b, i, u or f. */
  kind: string;
  itemBytes: number;
  littleEndian: boolean;
  fortranOrder: boolean;
  shape: number[];
  /** Offset of the first number. */
  dataOffset: number;
}

/** Whether bytes open as NPY does. */
export function isNpy(head: Uint8Array): boolean {
  return MAGIC.every((byte, at) => head[at] === byte);
}

/**
 * Reads an NPY header (format versions 1 to 3 of NumPy's `lib.format`) strictly, and checks that the numbers it
 * promises are in the file of `size` bytes. `where` of a Problem: header, dtype, shape or file, after `prefix`.
 */
export function parseNpyHeader(head: Uint8Array, size: number, prefix = ""): NpyHeader | Problem {
  const text = headerText(head, size, prefix);
  if (typeof text !== "string") return text;
  const fields = headerFields(text);
  if (fields === null) return invalidAt(`${prefix}header`, "is no NPY header of descr, fortran_order and shape, or its length is wrong");
  const dtype = parseDtype(fields.descr, prefix);
  if (isProblem(dtype)) return dtype;
  const shape = fields.shape.match(/\d+/g)?.map(Number) ?? [];
  const header = { ...dtype, fortranOrder: fields.fortranOrder, shape, dataOffset: dataOffsetOf(head) };
  return misfit(header, size, prefix) ?? header;
}

function headerText(head: Uint8Array, size: number, prefix: string): string | Problem {
  if (!isNpy(head)) return invalidAt(`${prefix}header`, "does not begin as an NPY file does");
  const version = head[6];
  if (version < 1 || version > 3) return invalidAt(`${prefix}header`, `NPY version ${version} is not read`);
  const stop = dataOffsetOf(head);
  if (stop > size || head.length < 12) return invalidAt(`${prefix}header`, "the header length is larger than the file");
  if (stop > head.length) return invalidAt(`${prefix}header`, `the header is longer than ${LONGEST_HEADER_BYTES} bytes`);
  return new TextDecoder(version === 3 ? "utf-8" : "latin1").decode(head.subarray(version === 1 ? 10 : 12, stop));
}

function dataOffsetOf(head: Uint8Array): number {
  const view = new DataView(head.buffer, head.byteOffset, head.byteLength);
  if (head.length < 12) return Infinity;
  return head[6] === 1 ? 10 + view.getUint16(8, true) : 12 + view.getUint32(8, true);
}

interface HeaderFields {
  descr: string;
  fortranOrder: boolean;
  shape: string;
}

/** Reads the Python dictionary of the header: the three keys, each once, in any order, and nothing else. */
function headerFields(text: string): HeaderFields | null {
  const body = /^\s*\{(.*)\}\s*$/s.exec(text)?.[1];
  if (body === undefined) return null;
  const pair = /\s*(['"])(descr|fortran_order|shape)\1\s*:\s*('[^']*'|"[^"]*"|True|False|\([\d\s,]*\)|\[[^{}]*\])\s*(?:,|$)/y;
  const found = new Map<string, string>();
  let at = 0;
  while (body.slice(at).trim() !== "") {
    pair.lastIndex = at;
    const match = pair.exec(body);
    if (match === null || found.has(match[2])) return null;
    found.set(match[2], match[3]);
    at = pair.lastIndex;
  }
  const descr = found.get("descr");
  const order = found.get("fortran_order");
  const shape = found.get("shape");
  if (descr === undefined || shape === undefined || (order !== "True" && order !== "False")) return null;
  if (!/^['"[]/.test(descr) || !/^\(\s*(\d+\s*,\s*)*(\d+\s*)?\)$/.test(shape)) return null;
  return { descr, fortranOrder: order === "True", shape };
}

function parseDtype(descr: string, prefix: string): Pick<NpyHeader, "kind" | "itemBytes" | "littleEndian"> | Problem {
  const where = `${prefix}dtype`;
  if (descr.startsWith("[")) return invalidAt(where, "structured arrays are not taken; save one plain array of numbers");
  const name = descr.slice(1, -1);
  if (/^\|?O/.test(name)) return invalidAt(where, "an object array is a pickle, which is never opened; save an array of numbers");
  const parts = /^([<>=|]?)(b1|i1|u1|[iu][248]|f[248]|\?)$/.exec(name);
  const kind = parts?.[2] === "?" ? "b1" : parts?.[2];
  if (parts === null || kind === undefined) return invalidAt(where, `${name.slice(0, 40)} is not taken; save integers, floats or booleans`);
  const itemBytes = Number(kind[1]);
  if (parts[1] === "|" && itemBytes > 1) return invalidAt(where, `${name} does not say its byte order`);
  return { kind: kind[0], itemBytes, littleEndian: parts[1] !== ">" };
}

/** Returns why the numbers promised cannot be those in the file: the shape when it is out of all proportion. */
function misfit(header: NpyHeader, size: number, prefix: string): Problem | null {
  const held = size - header.dataOffset;
  const promised = header.shape.reduce((product, length) => product * length, header.itemBytes);
  const shape = `(${header.shape.join(", ")})`;
  if (!Number.isSafeInteger(promised) || promised > 1024 * Math.max(held, 1024)) {
    return invalidAt(`${prefix}shape`, `${shape} is larger than the file`);
  }
  if (promised > held) return invalidAt(`${prefix}file`, `the data end early: ${held} bytes of ${promised}`);
  if (promised < held) return invalidAt(`${prefix}file`, `${held - promised} bytes more than the shape ${shape} needs`);
  return null;
}
