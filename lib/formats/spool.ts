import { createWriteStream } from "node:fs";
import { mkdtemp, rm } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { Readable } from "node:stream";
import { pipeline } from "node:stream/promises";
import type { ByteStream } from "@/lib/formats/byte-stream";
import { openFileSource, type FileSource } from "@/lib/formats/file-source";
import { isProblem, type Problem } from "@/lib/problem";

/** Writes a stream to a private temporary file; closing the source removes it. A Problem in the stream leaves nothing behind. */
export async function spool(stream: ByteStream): Promise<FileSource | Problem> {
  const folder = await mkdtemp(join(tmpdir(), "strandline-spool-"));
  const remove = (): Promise<void> => rm(folder, { recursive: true, force: true });
  try {
    const path = join(folder, "bytes");
    const trouble = await writeAll(stream, path);
    if (trouble !== null) {
      await remove();
      return trouble;
    }
    const file = await openFileSource(path);
    return { ...file, close: () => file.close().finally(remove) };
  } catch (error) {
    await remove();
    throw error;
  }
}

async function writeAll(stream: ByteStream, path: string): Promise<Problem | null> {
  const met: { trouble: Problem | null } = { trouble: null };
  async function* bytes(): AsyncGenerator<Uint8Array> {
    for await (const chunk of stream) {
      if (isProblem(chunk)) {
        met.trouble = chunk;
        return;
      }
      yield chunk;
    }
  }
  await pipeline(Readable.from(bytes()), createWriteStream(path, { mode: 0o600 }));
  return met.trouble;
}
