import "server-only";
import { Readable } from "node:stream";
import { pipeline } from "node:stream/promises";
import type { ReadableStream as WebStream } from "node:stream/web";
import busboy from "busboy";
import { database } from "@/db/connection";
import type { Actor } from "@/lib/accounts/policy";
import { isProblem, problem, type Problem } from "@/lib/problem";
import { safeFilename } from "./safe-filename";
import { removeBlob, storeBytes, type StoredBytes } from "./store-bytes";

export interface ReceivedFile extends StoredBytes {
  filename: string;
}

/** Stores one file of a request; the next may begin while the last chunks of this one are still being written. */
type Store = (bytes: Readable, filename: string | undefined) => Promise<ReceivedFile>;

const MOST_FILES = 100;

/**
 * Stores the files of a request, multipart field `file` or raw body, as they come, and returns them in the order they were
 * sent. When the request breaks off or is refused, nothing of it is kept.
 */
export async function receiveFiles({ groupId }: Pick<Actor, "groupId">, request: Request, filename: string | undefined): Promise<ReceivedFile[] | Problem> {
  if (!request.body) return emptyUpload(filename);
  const body = Readable.fromWeb(request.body as unknown as WebStream);
  const storing: Promise<ReceivedFile>[] = [];
  const store: Store = (bytes, name) => {
    // A stream may break before its first byte is asked for; whoever reads it hears of that, and nobody else has to.
    bytes.on("error", () => undefined);
    const stored = storeBytes(database(), groupId, bytes).then((kept) => ({ ...kept, filename: safeFilename(name) }));
    storing.push(stored);
    return stored;
  };
  try {
    const multipart = /^multipart\/form-data\b/i.test(request.headers.get("content-type") ?? "");
    const refused = multipart ? await storeForm(request, body, store) : await store(body, filename).then(() => null);
    const received = await Promise.all(storing);
    const fault = refused ?? emptyFile(received);
    if (fault) await forget(storing);
    return fault ?? received;
  } catch (error) {
    await forget(storing);
    if (request.signal.aborted || isBrokenUpload(error)) {
      return problem("malformed-request", "The upload ended before it was complete; nothing of it was kept.", [{ where: "body", message: "ended early" }]);
    }
    throw error;
  }
}

async function storeForm(request: Request, body: Readable, store: Store): Promise<Problem | null> {
  const parser = makeParser(request);
  if (isProblem(parser)) return parser;
  let files = 0;
  let tooMany = false;
  parser.on("filesLimit", () => {
    tooMany = true;
  });
  parser.on("file", (field, file, info) => {
    if (field !== "file") return void file.resume();
    files += 1;
    // The parser waits for ever for a file that nobody reads on: what stops one file stops the form.
    store(file, info.filename).catch((error: Error) => body.destroy(error));
  });
  await pipeline(body, parser);
  if (tooMany) return problem("too-large", `One request takes at most ${MOST_FILES} files; nothing of it was kept.`, [{ where: "file", message: `more than ${MOST_FILES} files` }]);
  return files > 0 ? null : emptyUpload(undefined);
}

function makeParser(request: Request): busboy.Busboy | Problem {
  try {
    return busboy({ headers: { "content-type": request.headers.get("content-type") ?? "" }, limits: { files: MOST_FILES, fields: 20, fieldSize: 1024 }, defParamCharset: "utf8" });
  } catch (error) {
    const message = error instanceof Error ? error.message : "not multipart";
    return problem("malformed-request", `The multipart body cannot be read: ${message}.`, [{ where: "content-type", message }]);
  }
}

function emptyUpload(filename: string | undefined): Problem {
  return problem("invalid-input", "The upload holds no file.", [{ where: filename ? `${safeFilename(filename)} file` : "file", message: "is missing" }]);
}

function emptyFile(received: ReceivedFile[]): Problem | null {
  const empty = received.find(({ bytes }) => bytes === 0);
  return empty ? problem("invalid-input", `${empty.filename} is empty.`, [{ where: `${empty.filename} file`, message: "is empty" }]) : null;
}

function isBrokenUpload(error: unknown): boolean {
  if (!(error instanceof Error)) return false;
  const code = "code" in error ? String(error.code) : "";
  return code === "ERR_STREAM_PREMATURE_CLOSE" || code === "ECONNRESET" || error.name === "AbortError" || /Unexpected end|aborted|terminated|Malformed/i.test(error.message);
}

/** Removes what was stored; a file that failed has removed itself. */
async function forget(storing: Promise<ReceivedFile>[]): Promise<void> {
  for (const outcome of await Promise.allSettled(storing)) {
    if (outcome.status === "fulfilled") await removeBlob(database(), outcome.value.blobId);
  }
}
