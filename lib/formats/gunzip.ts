import { Readable } from "node:stream";
import { createGunzip } from "node:zlib";
import { firstBytes, type ByteStream } from "@/lib/formats/byte-stream";
import { invalidAt, problem, type Problem } from "@/lib/problem";
import type { ByteSource } from "@/lib/formats/shot-batch";

const CHUNK_BYTES = 262_144;

/** Whether bytes open as gzip (RFC 1952) does. */
export function isGzip(head: Uint8Array): boolean {
  return head.length > 1 && head[0] === 0x1f && head[1] === 0x8b;
}

/** Returns a source's bytes in order, expanded when the source is gzip; concatenated members are one stream. */
export async function* plainStream(source: ByteSource, maxExpandedBytes: number): AsyncGenerator<Uint8Array | Problem> {
  if (isGzip(await source.read(0, 2))) yield* gunzip(source, maxExpandedBytes);
  else yield* source.stream();
}

/** Returns the first bytes of a source, looking inside gzip, or the Problem met there. */
export async function plainHead(source: ByteSource, length: number, maxExpandedBytes: number): Promise<Uint8Array | Problem> {
  return firstBytes(plainStream(source, maxExpandedBytes), length);
}

async function* gunzip(source: ByteSource, maxExpandedBytes: number): ByteStream & AsyncGenerator<Uint8Array | Problem> {
  const packed = Readable.from(source.stream());
  const expander = createGunzip({ chunkSize: CHUNK_BYTES });
  // A source that fails is no fault of the file, so it is told apart and thrown.
  let sourceFailure: unknown;
  packed.on("error", (error) => {
    sourceFailure = error;
    expander.destroy(error);
  });
  packed.pipe(expander);
  let expanded = 0;
  try {
    for await (const chunk of expander as AsyncIterable<Uint8Array>) {
      expanded += chunk.length;
      if (expanded > maxExpandedBytes) {
        yield tooLarge(maxExpandedBytes);
        return;
      }
      yield chunk;
    }
  } catch (error) {
    if (sourceFailure !== undefined || !isZlibError(error)) throw error;
    yield invalidAt("file", `the gzip stream is damaged or ends early (${error.message})`);
  } finally {
    packed.destroy();
    expander.destroy();
  }
}

/** Returns the Problem of a file that expands beyond what is taken. */
export function tooLarge(maxExpandedBytes: number): Problem {
  const message = `expands to more than ${maxExpandedBytes} bytes`;
  return problem("too-large", `file: ${message}`, [{ where: "file", message }]);
}

function isZlibError(error: unknown): error is Error {
  return error instanceof Error && "code" in error && typeof error.code === "string" && error.code.startsWith("Z_");
}
