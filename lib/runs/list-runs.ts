import "server-only";
import { group } from "d3";
import { and, desc, eq, inArray } from "drizzle-orm";
import { database } from "@/db/connection";
import { archives } from "@/db/schema/archives";
import { blobs } from "@/db/schema/blobs";
import { runVersions } from "@/db/schema/run-versions";
import { runs } from "@/db/schema/runs";
import { users } from "@/db/schema/users";
import { refusal, type Actor } from "@/lib/accounts/policy";
import { afterCursor } from "@/lib/http/after-cursor";
import { pageOf, type Cursor, type Page } from "@/lib/http/page-query";
import type { Problem } from "@/lib/problem";
import { ingestUnderWay, latestJobId } from "./find-run";
import { showRun, type ArchiveWithBytes, type ShownRun } from "./show-run";

/** Returns the runs of the member's group, newest first. */
export async function listRuns(actor: Actor, page: { cursor?: Cursor; limit: number }): Promise<Page<ShownRun> | Problem> {
  const refused = refusal(actor, "run.read");
  if (refused) return refused;
  const rows = await database()
    .select({ run: runs, version: runVersions, createdBy: users.name, ingesting: ingestUnderWay(), latestJobId: latestJobId() })
    .from(runs)
    .innerJoin(users, eq(users.id, runs.createdBy))
    .leftJoin(runVersions, and(eq(runVersions.runId, runs.id), eq(runVersions.number, runs.currentVersion)))
    .where(and(eq(runs.groupId, actor.groupId), afterCursor(runs, page.cursor)))
    .orderBy(desc(runs.createdAt), desc(runs.id))
    .limit(page.limit + 1);
  const archivesOf = await archivesByRun(actor, rows.map(({ run }) => run.id));
  const withCursor = rows.map((row) => ({ ...row, createdAt: row.run.createdAt, id: row.run.id }));
  return pageOf(withCursor, page.limit, ({ ingesting, ...row }) =>
    showRun({ ...row, ingesting: Boolean(ingesting), archives: archivesOf.get(row.run.id) ?? [] }),
  );
}

async function archivesByRun(actor: Actor, runIds: string[]): Promise<Map<string, ArchiveWithBytes[]>> {
  if (runIds.length === 0) return new Map();
  const rows = await database()
    .select({ archive: archives, bytes: blobs.bytes, sha256: blobs.sha256, createdBy: users.name })
    .from(archives)
    .innerJoin(blobs, eq(blobs.id, archives.blobId))
    .innerJoin(users, eq(users.id, archives.createdBy))
    .where(and(inArray(archives.runId, runIds), eq(archives.groupId, actor.groupId)))
    .orderBy(archives.createdAt);
  return group(rows, ({ archive }) => archive.runId);
}
