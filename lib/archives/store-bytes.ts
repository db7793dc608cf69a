import "server-only";
import { createHash } from "node:crypto";
import { eq } from "drizzle-orm";
import { writeBytes } from "@/db/blobs";
import type { Database } from "@/db/connection";
import { newId } from "@/db/new-id";
import { blobChunks, blobs } from "@/db/schema/blobs";

export const CHUNK_BYTES = 1024 * 1024;
const MOST_IN_FLIGHT = 4;

/** Bytes that have arrived in full but belong to no archive yet. */
export interface StoredBytes {
  blobId: string;
  bytes: number;
  sha256: string;
}

/**
 * Writes a stream into chunks and returns its length and SHA-256. Memory is constant: at most four chunks are on their
 * way while the stream is held back. When the stream breaks, what was written is removed and the error thrown on.
 */
export async function storeBytes(database: Database, groupId: string, stream: AsyncIterable<Uint8Array>): Promise<StoredBytes> {
  const blobId = newId();
  await database.insert(blobs).values({ id: blobId, groupId, sha256: null, bytes: 0, complete: false, createdAt: new Date() });
  const writer = chunkWriter(database, blobId);
  try {
    const hash = createHash("sha256");
    let bytes = 0;
    for await (const part of stream) {
      hash.update(part);
      bytes += part.byteLength;
      await writer.add(part);
    }
    await writer.end();
    return { blobId, bytes, sha256: hash.digest("hex") };
  } catch (error) {
    await writer.settle();
    await removeBlob(database, blobId);
    throw error;
  }
}

/** Removes a blob with its chunks. */
export async function removeBlob(database: Database, blobId: string): Promise<void> {
  await database.delete(blobChunks).where(eq(blobChunks.blobId, blobId));
  await database.delete(blobs).where(eq(blobs.id, blobId));
}

function chunkWriter(database: Database, blobId: string) {
  const inFlight = new Set<Promise<void>>();
  let chunk = Buffer.allocUnsafe(CHUNK_BYTES);
  let filled = 0;
  let seq = 0;
  let failure: unknown = null;

  const send = async () => {
    while (inFlight.size >= MOST_IN_FLIGHT) await Promise.race(inFlight);
    if (failure) throw failure;
    const data = filled === CHUNK_BYTES ? chunk : Buffer.from(chunk.subarray(0, filled));
    const writing = writeBytes(database, "INSERT INTO archive_chunks (blob_id, seq, data) VALUES (?, ?, ?)", [blobId, seq, data])
      .catch((error: unknown) => {
        failure = error;
      })
      .finally(() => inFlight.delete(writing));
    inFlight.add(writing);
    seq += 1;
    chunk = Buffer.allocUnsafe(CHUNK_BYTES);
    filled = 0;
  };

  return {
    async add(part: Uint8Array) {
      for (let from = 0; from < part.byteLength; ) {
        const taken = Math.min(CHUNK_BYTES - filled, part.byteLength - from);
        chunk.set(part.subarray(from, from + taken), filled);
        filled += taken;
        from += taken;
        if (filled === CHUNK_BYTES) await send();
      }
    },
    async end() {
      if (filled > 0) await send();
      await Promise.all(inFlight);
      if (failure) throw failure;
    },
    async settle() {
      await Promise.allSettled(inFlight);
    },
  };
}
