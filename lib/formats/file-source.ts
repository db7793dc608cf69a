import { open, type FileHandle } from "node:fs/promises";
import type { ByteSource } from "@/lib/formats/shot-batch";

const CHUNK_BYTES = 262_144;

/** A file as a source; whoever opens it closes it. */
export interface FileSource extends ByteSource {
  close(): Promise<void>;
}

/** Opens a file for reading. Throws what the file system throws. */
export async function openFileSource(path: string): Promise<FileSource> {
  const file = await open(path, "r");
  const { size } = await file.stat();
  const read = (offset: number, length: number): Promise<Uint8Array> => readFully(file, offset, Math.max(0, Math.min(length, size - offset)));
  return { size, read, stream: () => chunks(read, size), close: () => file.close() };
}

async function* chunks(read: ByteSource["read"], size: number): AsyncGenerator<Uint8Array> {
  for (let offset = 0; offset < size; offset += CHUNK_BYTES) yield await read(offset, CHUNK_BYTES);
}

async function readFully(file: FileHandle, offset: number, length: number): Promise<Uint8Array> {
  const bytes = new Uint8Array(length);
  let filled = 0;
  while (filled < length) {
    const { bytesRead } = await file.read(bytes, filled, length - filled, offset + filled);
    if (bytesRead === 0) break;
    filled += bytesRead;
  }
  return bytes.subarray(0, filled);
}
