import { Readable } from "node:stream";
import { crc32 } from "node:zlib";
import { fromRandomAccessReaderPromise, RandomAccessReader, type Entry, type ZipFile } from "yauzl";
import type { StreamedBytes } from "@/lib/formats/byte-stream";
import type { ByteSource } from "@/lib/formats/shot-batch";
import { invalidAt, type Problem } from "@/lib/problem";

const MOST_MEMBERS = 10_000;

/** A file within a ZIP archive: its declared expanded size and its bytes in order. */
export interface ZipMember extends StreamedBytes {
  name: string;
}

/** Lists the members of a ZIP archive, or says where it is damaged. Names are as given: none is safe as a path. */
export async function listZipMembers(source: ByteSource): Promise<ZipMember[] | Problem> {
  const reader = new SourceReader(source);
  try {
    const zip = await fromRandomAccessReaderPromise(reader, source.size, { autoClose: false, decodeStrings: false });
    const members: ZipMember[] = [];
    for await (const entry of zip.eachEntry()) {
      if (members.length === MOST_MEMBERS) return invalidAt("file", `holds more than ${MOST_MEMBERS} members`);
      const name = new TextDecoder().decode(entry.fileNameRaw);
      members.push({ name, size: entry.uncompressedSize, stream: () => memberBytes(zip, reader, entry, name) });
    }
    return members;
  } catch (error) {
    return damaged(reader, error, "the archive");
  }
}

/** Expands one member; yauzl holds it to its declared size, and its CRC-32 is checked at the end. */
async function* memberBytes(zip: ZipFile, reader: SourceReader, entry: Entry, name: string): AsyncGenerator<Uint8Array | Problem> {
  let sum = 0;
  try {
    const bytes = await zip.openReadStreamPromise(entry);
    for await (const chunk of bytes as AsyncIterable<Uint8Array>) {
      sum = crc32(chunk, sum);
      yield chunk;
    }
  } catch (error) {
    yield damaged(reader, error, name);
    return;
  }
  if (sum !== entry.crc32) yield invalidAt("file", `${name} is damaged: its checksum is wrong`);
}

/** Tells a damaged archive (a Problem) from a source that failed (thrown on). */
function damaged(reader: SourceReader, error: unknown, what: string): Problem {
  if (reader.failure !== undefined) throw reader.failure;
  if (!(error instanceof Error)) throw error;
  return invalidAt("file", `${what} is damaged or ends early (${error.message})`);
}

/** Lets the archive library read from a source, and keeps what the source threw. */
class SourceReader extends RandomAccessReader {
  failure: unknown;
  private readonly source: ByteSource;

  constructor(source: ByteSource) {
    super();
    this.source = source;
  }

  override _readStreamForRange(start: number, end: number): Readable {
    return Readable.from(this.range(start, end));
  }

  private async *range(start: number, end: number): AsyncGenerator<Uint8Array> {
    const step = 262_144;
    for (let offset = start; offset < end; offset += step) yield await this.bytes(offset, Math.min(step, end - offset));
  }

  private async bytes(offset: number, length: number): Promise<Uint8Array> {
    try {
      return await this.source.read(offset, length);
    } catch (error) {
      this.failure = error;
      throw error;
    }
  }
}
