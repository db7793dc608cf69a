import "server-only";
import { readBytes } from "@/db/blobs";
import type { Database } from "@/db/connection";
import type { ByteSource } from "@/lib/formats/shot-batch";
import { CHUNK_BYTES } from "./store-bytes";

/** Returns an archive's bytes with random access and in order, chunk by chunk; the next chunk is fetched while one is read. */
export function archiveSource(database: Database, blobId: string, bytes: number, onRead: (bytes: number) => void = () => undefined): ByteSource {
  const chunks = Math.ceil(bytes / CHUNK_BYTES);
  const fetchChunk = async (seq: number): Promise<Uint8Array> => {
    const [row] = await readBytes<{ data: Buffer }>(database, "SELECT data FROM archive_chunks WHERE blob_id = ? AND seq = ?", [blobId, seq]);
    if (!row) throw new Error(`chunk ${seq} of blob ${blobId} is missing`);
    return row.data;
  };
  let kept: { seq: number; data: Promise<Uint8Array> } | null = null;
  const chunk = (seq: number): Promise<Uint8Array> => {
    if (kept?.seq !== seq) kept = { seq, data: fetchChunk(seq) };
    return kept.data;
  };
  return {
    size: bytes,
    async read(offset, length) {
      const end = Math.min(bytes, offset + length);
      const parts: Uint8Array[] = [];
      for (let at = Math.max(0, offset); at < end; ) {
        const seq = Math.floor(at / CHUNK_BYTES);
        const data = await chunk(seq);
        const part = data.subarray(at - seq * CHUNK_BYTES, Math.min(end - seq * CHUNK_BYTES, data.byteLength));
        parts.push(part);
        at += part.byteLength;
      }
      const joined = parts.length === 1 ? parts[0] : Buffer.concat(parts);
      onRead(joined.byteLength);
      return joined;
    },
    async *stream() {
      let next = chunks > 0 ? fetchChunk(0) : null;
      for (let seq = 0; next !== null; seq++) {
        const data: Uint8Array = await next;
        next = seq + 1 < chunks ? fetchChunk(seq + 1) : null;
        next?.catch(() => undefined);
        onRead(data.byteLength);
        yield data;
      }
    },
  };
}
