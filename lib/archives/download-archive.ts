import "server-only";
import { and, eq } from "drizzle-orm";
import { database } from "@/db/connection";
import { archives } from "@/db/schema/archives";
import { blobs } from "@/db/schema/blobs";
import { refusal, type Actor } from "@/lib/accounts/policy";
import { problem, type Problem } from "@/lib/problem";
import { archiveSource } from "./archive-source";

/** Answers an archive's original bytes, streamed, always as a download. */
export async function downloadArchive(actor: Actor, archiveId: string, request: Request): Promise<Response | Problem> {
  const refused = refusal(actor, "archive.read");
  if (refused) return refused;
  const [row] = await database()
    .select({ filename: archives.filename, blobId: blobs.id, bytes: blobs.bytes, sha256: blobs.sha256 })
    .from(archives)
    .innerJoin(blobs, eq(blobs.id, archives.blobId))
    .where(and(eq(archives.id, archiveId), eq(archives.groupId, actor.groupId)));
  if (!row) return problem("not-found", "There is no such archive.");
  const etag = `"${row.sha256}"`;
  if (request.headers.get("if-none-match") === etag) return new Response(null, { status: 304, headers: { etag } });
  const chunks = archiveSource(database(), row.blobId, row.bytes).stream()[Symbol.asyncIterator]();
  const body = new ReadableStream<Uint8Array>({
    async pull(controller) {
      const { done, value } = await chunks.next();
      if (done) controller.close();
      else controller.enqueue(value);
    },
    async cancel() {
      await chunks.return?.();
    },
  });
  return new Response(body, {
    headers: {
      "content-type": "application/octet-stream",
      "content-disposition": attachment(row.filename),
      "x-content-type-options": "nosniff",
      // The framework sends in chunks and drops a length; the digest (RFC 9530) tells whether all of it arrived.
      "repr-digest": `sha-256=:${Buffer.from(row.sha256 ?? "", "hex").toString("base64")}:`,
      "cache-control": "private, no-cache, no-transform",
      etag,
    },
  });
}

/** RFC 6266: a plain name for old clients, the true one in UTF-8. */
function attachment(filename: string): string {
  const plain = filename.replace(/[^\x20-\x7e]/g, "_").replace(/["\\%]/g, "_");
  const exact = encodeURIComponent(filename).replace(/['()*]/g, (sign) => `%${sign.charCodeAt(0).toString(16).toUpperCase()}`);
  return `attachment; filename="${plain}"; filename*=UTF-8''${exact}`;
}
