import "server-only";
import { and, asc, eq } from "drizzle-orm";
import { database } from "@/db/connection";
import { archives } from "@/db/schema/archives";
import { blobs } from "@/db/schema/blobs";
import { runs } from "@/db/schema/runs";
import { users } from "@/db/schema/users";
import { refusal, type Actor } from "@/lib/accounts/policy";
import { problem, type Problem } from "@/lib/problem";
import { findCurrentVersion, ingestUnderWay, latestJobId } from "./find-run";
import { showRun, type ArchiveWithBytes, type ShownRun } from "./show-run";

/** Returns a run of the member's group with its current version and archives. */
export async function getRun(actor: Actor, runId: string): Promise<ShownRun | Problem> {
  const refused = refusal(actor, "run.read");
  return refused ?? getRunInGroup(actor, runId);
}

/** The same without asking for the right to read: what a member may make or change, it is shown as the answer. */
export async function getRunInGroup(actor: Pick<Actor, "groupId">, runId: string): Promise<ShownRun | Problem> {
  const [row] = await database()
    .select({ run: runs, createdBy: users.name, ingesting: ingestUnderWay(), latestJobId: latestJobId() })
    .from(runs)
    .innerJoin(users, eq(users.id, runs.createdBy))
    .where(and(eq(runs.id, runId), eq(runs.groupId, actor.groupId)));
  if (!row) return problem("not-found", "There is no such run.");
  const [version, archiveRows] = await Promise.all([findCurrentVersion(database(), row.run), listArchives(actor, runId)]);
  return showRun({ ...row, version, archives: archiveRows, ingesting: Boolean(row.ingesting) });
}

function listArchives(actor: Pick<Actor, "groupId">, runId: string): Promise<ArchiveWithBytes[]> {
  return database()
    .select({ archive: archives, bytes: blobs.bytes, sha256: blobs.sha256, createdBy: users.name })
    .from(archives)
    .innerJoin(blobs, eq(blobs.id, archives.blobId))
    .innerJoin(users, eq(users.id, archives.createdBy))
    .where(and(eq(archives.runId, runId), eq(archives.groupId, actor.groupId)))
    .orderBy(asc(archives.createdAt), asc(archives.id));
}
