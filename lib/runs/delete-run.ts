import "server-only";
import { and, eq, inArray } from "drizzle-orm";
import { database } from "@/db/connection";
import { analyses } from "@/db/schema/analyses";
import { archives } from "@/db/schema/archives";
import { blobChunks, blobs } from "@/db/schema/blobs";
import { detections } from "@/db/schema/detections";
import { jobs } from "@/db/schema/jobs";
import { resultArrays } from "@/db/schema/result-arrays";
import { runVersions } from "@/db/schema/run-versions";
import { runs } from "@/db/schema/runs";
import { shotBlocks } from "@/db/schema/shot-blocks";
import { siteHistograms } from "@/db/schema/site-histograms";
import { inTransaction, type Transaction } from "@/db/transaction";
import { refusal, type Actor } from "@/lib/accounts/policy";
import { isProblem, type Problem } from "@/lib/problem";
import { lockRunInGroup } from "./find-run";

/** Removes a run with its versions, detections, analyses and archives; bytes another run of the group uses stay. */
export async function deleteRun(actor: Actor, runId: string): Promise<null | Problem> {
  const refused = refusal(actor, "run.delete");
  if (refused) return refused;
  return inTransaction(database(), async (transaction) => {
    const run = await lockRunInGroup(transaction, actor, runId);
    if (isProblem(run)) return run;
    // A worker that is at one of these jobs loses its lock with the row, and can write nothing afterwards.
    await transaction.delete(jobs).where(and(eq(jobs.runId, runId), eq(jobs.groupId, actor.groupId)));
    await removeResults(transaction, runId);
    await removeShots(transaction, runId);
    await removeArchives(transaction, actor, runId);
    await transaction.delete(runs).where(and(eq(runs.id, runId), eq(runs.groupId, actor.groupId)));
    return null;
  });
}

async function removeResults(transaction: Transaction, runId: string): Promise<void> {
  const rows = await transaction.select({ id: analyses.id }).from(analyses).where(eq(analyses.runId, runId));
  const ids = rows.map(({ id }) => id);
  if (ids.length > 0) await transaction.delete(resultArrays).where(inArray(resultArrays.analysisId, ids));
  await transaction.delete(analyses).where(eq(analyses.runId, runId));
  await transaction.delete(detections).where(eq(detections.runId, runId));
}

async function removeShots(transaction: Transaction, runId: string): Promise<void> {
  await transaction.delete(shotBlocks).where(eq(shotBlocks.runId, runId));
  await transaction.delete(siteHistograms).where(eq(siteHistograms.runId, runId));
  await transaction.delete(runVersions).where(eq(runVersions.runId, runId));
}

async function removeArchives(transaction: Transaction, actor: Actor, runId: string): Promise<void> {
  const own = await transaction.select({ blobId: archives.blobId }).from(archives).where(eq(archives.runId, runId));
  await transaction.delete(archives).where(and(eq(archives.runId, runId), eq(archives.groupId, actor.groupId)));
  const blobIds = [...new Set(own.map(({ blobId }) => blobId))];
  if (blobIds.length === 0) return;
  const shared = await transaction.select({ blobId: archives.blobId }).from(archives).where(inArray(archives.blobId, blobIds)).for("update");
  const sharedIds = shared.map(({ blobId }) => blobId);
  const unused = blobIds.filter((blobId) => !sharedIds.includes(blobId));
  if (unused.length === 0) return;
  await transaction.delete(blobChunks).where(inArray(blobChunks.blobId, unused));
  await transaction.delete(blobs).where(inArray(blobs.id, unused));
}
