import type { ByteStream } from "@/lib/formats/byte-stream";
import { invalidAt, isProblem, type Problem } from "@/lib/problem";

const NEWLINE = 10;
const LONGEST_LINE_BYTES = 1_048_576;

/**
 * Regroups bytes into blocks of whole lines (only the last may lack its newline), without a UTF-8 byte order mark.
 * Across chunk borders it keeps the unfinished line.
 */
export async function* lineBlocks(stream: ByteStream): AsyncGenerator<Uint8Array | Problem> {
  let unfinished = new Uint8Array(0);
  let atStart = true;
  for await (const chunk of stream) {
    if (isProblem(chunk)) {
      yield chunk;
      return;
    }
    const cut = chunk.lastIndexOf(NEWLINE) + 1;
    if (cut > 0) {
      yield withoutMark(joined(unfinished, chunk.subarray(0, cut)), atStart);
      atStart = false;
      unfinished = chunk.slice(cut);
    } else unfinished = joined(unfinished, chunk);
    if (unfinished.length > LONGEST_LINE_BYTES) {
      yield invalidAt("file", `a line is longer than ${LONGEST_LINE_BYTES} bytes; this is not a table of shots`);
      return;
    }
  }
  if (unfinished.length > 0) yield withoutMark(unfinished, atStart);
}

function joined(first: Uint8Array, second: Uint8Array): Uint8Array<ArrayBuffer> {
  const bytes = new Uint8Array(first.length + second.length);
  bytes.set(first);
  bytes.set(second, first.length);
  return bytes;
}

function withoutMark(bytes: Uint8Array, atStart: boolean): Uint8Array {
  const marked = atStart && bytes.length >= 3 && bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf;
  return marked ? bytes.subarray(3) : bytes;
}
