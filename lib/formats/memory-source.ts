import type { ByteSource } from "@/lib/formats/shot-batch";

/** Returns bytes in memory as a source; `chunkBytes` is the length of the pieces in which they stream. */
export function memorySource(bytes: Uint8Array, chunkBytes = 65_536): ByteSource {
  return {
    size: bytes.length,
    read: async (offset, length) => bytes.subarray(offset, offset + length),
    stream: () => pieces(bytes, chunkBytes),
  };
}

async function* pieces(bytes: Uint8Array, chunkBytes: number): AsyncGenerator<Uint8Array> {
  for (let from = 0; from < bytes.length; from += chunkBytes) yield bytes.subarray(from, from + chunkBytes);
}
