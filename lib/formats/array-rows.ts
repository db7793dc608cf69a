import type { NpyArray } from "@/lib/formats/npy-array";
import { itemsAt } from "@/lib/formats/npy-items";
import { spool } from "@/lib/formats/spool";
import { invalidAt, isProblem, type Problem } from "@/lib/problem";
import type { ByteStream } from "@/lib/formats/byte-stream";

const BLOCK_BYTES = 1_048_576;
/** In Fortran order a block takes one read a site, so blocks are larger. */
const FORTRAN_BLOCK_BYTES = 16_777_216;

/** Some shots of a counts array: `values` is `[row][site]`; row `r` is shot `first + r` in the order of the file. */
export interface RowBlock {
  first: number;
  rows: number;
  values: Float64Array;
}

/**
 * Walks an array of counts (…, N) as shots of N sites in blocks of bounded size. In C order the shots of (T, M, N) come
 * time by time; in Fortran order shot by shot, its time index running fastest.
 */
export async function* arrayRows(array: NpyArray): AsyncGenerator<RowBlock | Problem> {
  const sites = array.header.shape[array.header.shape.length - 1];
  const rows = array.header.shape.slice(0, -1).reduce((product, length) => product * length, 1);
  if (array.header.fortranOrder) yield* fortranRows(array, rows, sites);
  else yield* contiguousRows(array, rows, sites);
}

async function* contiguousRows(array: NpyArray, rows: number, sites: number): AsyncGenerator<RowBlock | Problem> {
  const { header, bytes, prefix } = array;
  const rowBytes = sites * header.itemBytes;
  let first = 0;
  for await (const block of rowAligned(bytes.stream(), header.dataOffset, rowBytes)) {
    if (isProblem(block)) {
      yield block;
      return;
    }
    const count = Math.min(rows - first, block.length / rowBytes);
    yield { first, rows: count, values: itemsAt(header, block, count * sites) };
    first += count;
  }
  if (first < rows) yield invalidAt(`${prefix}file`, `the data end early: ${first} shots of ${rows}`);
}

/** Cuts a stream, from `skip` on, into blocks of whole rows; it keeps the unfinished row across chunk borders. */
async function* rowAligned(stream: ByteStream, skip: number, rowBytes: number): AsyncGenerator<Uint8Array | Problem> {
  const block = new Uint8Array(Math.max(rowBytes, BLOCK_BYTES - (BLOCK_BYTES % rowBytes)));
  let filled = 0;
  let toSkip = skip;
  for await (const chunk of stream) {
    if (isProblem(chunk)) {
      yield chunk;
      return;
    }
    let at = Math.min(toSkip, chunk.length);
    toSkip -= at;
    while (at < chunk.length) {
      const part = chunk.subarray(at, at + block.length - filled);
      block.set(part, filled);
      filled += part.length;
      at += part.length;
      if (filled < block.length) continue;
      yield block;
      filled = 0;
    }
  }
  if (filled >= rowBytes) yield block.subarray(0, filled - (filled % rowBytes));
}

/** Fortran order keeps each site in its own run of all shots, so the bytes are set down where any part can be read. */
async function* fortranRows(array: NpyArray, rows: number, sites: number): AsyncGenerator<RowBlock | Problem> {
  const { header, bytes, prefix } = array;
  const file = await spool(bytes.stream());
  if (isProblem(file)) {
    yield file;
    return;
  }
  try {
    const blockRows = Math.max(1, Math.floor(FORTRAN_BLOCK_BYTES / (8 * sites)));
    for (let first = 0; first < rows; first += blockRows) {
      const count = Math.min(blockRows, rows - first);
      const values = new Float64Array(count * sites);
      for (let i = 0; i < sites; i++) {
        const run = await file.read(header.dataOffset + (i * rows + first) * header.itemBytes, count * header.itemBytes);
        if (run.length < count * header.itemBytes) {
          yield invalidAt(`${prefix}file`, "the data end early");
          return;
        }
        const column = itemsAt(header, run, count);
        for (let r = 0; r < count; r++) values[r * sites + i] = column[r];
      }
      yield { first, rows: count, values };
    }
  } finally {
    await file.close();
  }
}
