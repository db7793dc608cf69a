import "server-only";
import { and, eq, lt } from "drizzle-orm";
import type { Database } from "@/db/connection";
import { blobs } from "@/db/schema/blobs";
import { removeBlob } from "./store-bytes";

const ABANDONED_AFTER_MS = 24 * 3600_000;

/** Removes the bytes of uploads whose server died before they were complete. */
export async function sweepAbandonedBlobs(database: Database, now = new Date()): Promise<number> {
  const before = new Date(now.getTime() - ABANDONED_AFTER_MS);
  const abandoned = await database.select({ id: blobs.id }).from(blobs).where(and(eq(blobs.complete, false), lt(blobs.createdAt, before)));
  for (const { id } of abandoned) await removeBlob(database, id);
  return abandoned.length;
}
