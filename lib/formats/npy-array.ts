import { firstBytes, type StreamedBytes } from "@/lib/formats/byte-stream";
import { itemsAt } from "@/lib/formats/npy-items";
import { NPY_HEAD_BYTES, parseNpyHeader, type NpyHeader } from "@/lib/formats/npy-header";
import { invalidAt, isProblem, type Problem } from "@/lib/problem";

const MOST_SMALL_VALUES = 10_000_000;

/** An array in a file: its header read, its numbers still there. */
export interface NpyArray {
  /** The array's name in messages: counts, times_us, … */
  name: string;
  /** Put before the places of header faults: empty for a lone file, the name and a space for a member. */
  prefix: string;
  header: NpyHeader;
  bytes: StreamedBytes;
}

/** Opens an array by its header. */
export async function openNpyArray(bytes: StreamedBytes, name: string, prefix: string): Promise<NpyArray | Problem> {
  const head = await firstBytes(bytes.stream(), Math.min(NPY_HEAD_BYTES, bytes.size));
  if (isProblem(head)) return head;
  const header = parseNpyHeader(head, bytes.size, prefix);
  return isProblem(header) ? header : { name, prefix, header, bytes };
}

/** Returns all numbers of a small array in the order of the file. */
export async function smallValues(array: NpyArray): Promise<Float64Array | Problem> {
  const { header, bytes, name } = array;
  const length = header.shape.reduce((product, part) => product * part, 1);
  if (length > MOST_SMALL_VALUES) return invalidAt(name, `${length} numbers are too many here`);
  const all = await firstBytes(bytes.stream(), bytes.size);
  if (isProblem(all)) return all;
  if (all.length < header.dataOffset + length * header.itemBytes) return invalidAt(`${array.prefix}file`, "the data end early");
  return itemsAt(header, all.subarray(header.dataOffset), length);
}
