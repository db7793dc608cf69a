import "server-only";
import { Readable } from "node:stream";
import { pipeline } from "node:stream/promises";
import type { ReadableStream as WebStream } from "node:stream/web";
import busboy from "busboy";
import { database as openDatabase, type Database } from "@/db/connection";
import type { Actor } from "@/lib/accounts/policy";
import { isProblem, problem, type Problem } from "@/lib/problem";
import { safeFilename } from "./safe-filename";
import { removeBlob, storeBytes, type StoredBytes } from "./store-bytes";

export interface ReceivedFile extends StoredBytes {
  filename: string;
}

const MOST_FILES = 100;

/**
 * Stores the files of a request, multipart field `file` or raw body, as they come. When the request breaks off, nothing of
 * it is kept.
 */
export async function receiveFiles({ groupId }: Pick<Actor, "groupId">, request: Request, filename: string | undefined): Promise<ReceivedFile[] | Problem> {
  const database = openDatabase();
  if (!request.body) return emptyUpload(filename);
  const stream = Readable.fromWeb(request.body as unknown as WebStream);
  const received: ReceivedFile[] = [];
  try {
    const multipart = /^multipart\/form-data\b/i.test(request.headers.get("content-type") ?? "");
    const refused = multipart
      ? await receiveMultipart(database, groupId, request, stream, received)
      : await receiveRaw(database, groupId, filename, stream, received);
    const fault = refused ?? emptyFile(received);
    if (fault) await forget(database, received);
    return fault ?? received;
  } catch (error) {
    await forget(database, received);
    if (request.signal.aborted || isBrokenUpload(error)) {
      return problem("malformed-request", "The upload ended before it was complete; nothing of it was kept.", [{ where: "body", message: "ended early" }]);
    }
    throw error;
  }
}

async function receiveRaw(database: Database, groupId: string, filename: string | undefined, stream: Readable, received: ReceivedFile[]): Promise<null> {
  received.push({ filename: safeFilename(filename), ...(await storeBytes(database, groupId, stream)) });
  return null;
}

async function receiveMultipart(database: Database, groupId: string, request: Request, stream: Readable, received: ReceivedFile[]): Promise<Problem | null> {
  const parser = makeParser(request);
  if (isProblem(parser)) return parser;
  const storing: Promise<ReceivedFile>[] = [];
  parser.on("file", (field, file, info) => {
    if (field !== "file") return void file.resume();
    const stored = storeBytes(database, groupId, file).then((bytes) => ({ filename: safeFilename(info.filename), ...bytes }));
    // An aborted upload rejects here and in the pipeline; the pipeline's rejection is the one that is answered.
    stored.catch(() => undefined);
    storing.push(stored);
  });
  try {
    await pipeline(stream, parser);
  } finally {
    // In the order of the form, whichever was stored first: it is the order in which they are read.
    for (const outcome of await Promise.allSettled(storing)) if (outcome.status === "fulfilled") received.push(outcome.value);
  }
  await Promise.all(storing);
  return received.length > 0 ? null : emptyUpload(undefined);
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

async function forget(database: Database, received: ReceivedFile[]): Promise<void> {
  for (const { blobId } of received) await removeBlob(database, blobId);
}
