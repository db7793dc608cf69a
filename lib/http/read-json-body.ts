import { problem, type Problem } from "@/lib/problem";

const MOST_BYTES = 1024 * 1024;
/** So much of a body that is too large is still taken off the line, so that its sender can read the answer. */
const MOST_DISCARDED_BYTES = 64 * MOST_BYTES;

export interface JsonBody {
  /** As sent; what an idempotency key is bound to. */
  text: string;
  value: unknown;
}

/** Reads a JSON body of at most 1 MiB. Problems: 415 another content type, 413 too large, 400 not UTF-8 or not JSON. */
export async function readJsonBody(request: Request): Promise<JsonBody | Problem> {
  const contentType = request.headers.get("content-type")?.split(";")[0].trim().toLowerCase() ?? "";
  if (contentType !== "application/json") {
    return problem("unknown-format", `Send the body as application/json, not ${contentType || "without a content type"}.`);
  }
  const bytes = await readAtMost(request, MOST_BYTES);
  if (bytes === null) return problem("too-large", "A JSON body may have at most 1 MiB.");
  return parse(bytes);
}

async function readAtMost(request: Request, most: number): Promise<Buffer | null> {
  if (request.body === null) return Buffer.alloc(0);
  const chunks: Uint8Array[] = [];
  let length = 0;
  for await (const chunk of request.body as ReadableStream<Uint8Array> & AsyncIterable<Uint8Array>) {
    length += chunk.byteLength;
    if (length <= most) chunks.push(chunk);
    else if (length > MOST_DISCARDED_BYTES) break;
  }
  return length <= most ? Buffer.concat(chunks) : null;
}

function parse(bytes: Buffer): JsonBody | Problem {
  try {
    const text = new TextDecoder("utf-8", { fatal: true }).decode(bytes);
    return { text, value: JSON.parse(text) as unknown };
  } catch (error) {
    const why = bytes.length === 0 ? "it is empty" : error instanceof SyntaxError ? error.message : "it is not UTF-8";
    return problem("malformed-request", `The body is not JSON: ${why}.`, [{ where: "body", message: why }]);
  }
}
