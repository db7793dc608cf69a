import { isProblem, type Problem } from "@/lib/problem";

/** Bytes in order on their way through a layer; a Problem is the last item. */
export type ByteStream = AsyncIterable<Uint8Array | Problem>;

/** Bytes of a known length that can be read in order, any number of times. */
export interface StreamedBytes {
  size: number;
  stream(): ByteStream;
}

/** Returns the first `length` bytes of a stream, fewer when it is shorter, or its Problem. */
export async function firstBytes(stream: ByteStream, length: number): Promise<Uint8Array | Problem> {
  const head = new Uint8Array(length);
  let filled = 0;
  for await (const chunk of stream) {
    if (isProblem(chunk)) return chunk;
    const part = chunk.subarray(0, length - filled);
    head.set(part, filled);
    filled += part.length;
    if (filled === length) break;
  }
  return head.subarray(0, filled);
}
