import "server-only";
import { and, desc, eq, max } from "drizzle-orm";
import { database } from "@/db/connection";
import { newId } from "@/db/new-id";
import { archives } from "@/db/schema/archives";
import { blobs } from "@/db/schema/blobs";
import { jobs } from "@/db/schema/jobs";
import { runs } from "@/db/schema/runs";
import { inTransaction, type Transaction } from "@/db/transaction";
import { refusal, type Actor } from "@/lib/accounts/policy";
import { enqueueJob } from "@/lib/jobs/enqueue-job";
import { isProblem, type Problem } from "@/lib/problem";
import { findRunInGroup } from "@/lib/runs/find-run";
import type { UploadQuery } from "./archive-schemas";
import type { ReceivedFile } from "./receive-files";
import { removeBlob } from "./store-bytes";

export interface AddedArchives {
  archives: { id: string; filename: string; bytes: number; sha256: string; duplicate: boolean }[];
  job: { id: string } | null;
  /** Every file was part of the run already; nothing was stored and nothing will be read. */
  duplicate: boolean;
}

type Options = Pick<UploadQuery, "role" | "times_us">;

/** Returns why the member may not add archives to this run, before a byte is read; null when they may. */
export async function uploadRefusal(actor: Actor, runId: string): Promise<Problem | null> {
  const refused = refusal(actor, "archive.upload");
  if (refused) return refused;
  const run = await findRunInGroup(database(), actor, runId);
  return isProblem(run) ? run : null;
}

/** Makes received files archives of a run and has them read: acknowledged only when bytes, rows and job are durable. */
export async function addArchives(actor: Actor, runId: string, files: ReceivedFile[], options: Options): Promise<AddedArchives | Problem> {
  const refused = await uploadRefusal(actor, runId);
  const unused: string[] = [];
  const added = refused ?? (await inTransaction(database(), async (transaction) => {
    unused.length = 0;
    const [run] = await transaction.select().from(runs).where(and(eq(runs.id, runId), eq(runs.groupId, actor.groupId))).for("update");
    const results: AddedArchives["archives"] = [];
    let arrival = await nextArrival(transaction, run.id);
    for (const file of files) results.push(await addArchive(transaction, actor, run.id, file, new Date(arrival++), options, unused));
    const news = results.some(({ duplicate }) => !duplicate);
    return { archives: results, job: news ? { id: await ingestJob(transaction, actor, runId) } : await latestIngest(transaction, actor, runId), duplicate: !news };
  }));
  for (const blobId of isProblem(added) ? files.map((file) => file.blobId) : unused) await removeBlob(database(), blobId);
  return added;
}

async function addArchive(transaction: Transaction, actor: Actor, runId: string, file: ReceivedFile, createdAt: Date, options: Options, unused: string[]): Promise<AddedArchives["archives"][number]> {
  const blobId = await shareBlob(transaction, actor, file, unused);
  const { filename, bytes, sha256 } = file;
  const [known] = await transaction.select().from(archives).where(and(eq(archives.runId, runId), eq(archives.blobId, blobId), eq(archives.role, options.role)));
  if (known && !(known.state === "refused" && options.times_us)) return { id: known.id, filename: known.filename, bytes, sha256, duplicate: true };
  if (known) {
    await transaction.update(archives).set({ state: "waiting", timesUs: options.times_us, problem: null }).where(eq(archives.id, known.id));
    return { id: known.id, filename: known.filename, bytes, sha256, duplicate: false };
  }
  const id = newId();
  await transaction.insert(archives).values({
    id,
    groupId: actor.groupId,
    runId,
    blobId,
    filename,
    role: options.role,
    timesUs: options.times_us ?? null,
    state: "waiting",
    createdBy: actor.userId,
    createdAt,
  });
  return { id, filename, bytes, sha256, duplicate: false };
}

/** Archives are read in order of arrival, so no two of a run may share a millisecond. */
async function nextArrival(transaction: Transaction, runId: string): Promise<number> {
  const [{ latest }] = await transaction.select({ latest: max(archives.createdAt) }).from(archives).where(eq(archives.runId, runId));
  return Math.max(Date.now(), (latest?.getTime() ?? 0) + 1);
}

/** Returns the blob that holds these bytes for the group: an earlier one when there is one, and then ours is not needed. */
async function shareBlob(transaction: Transaction, actor: Actor, file: ReceivedFile, unused: string[]): Promise<string> {
  const [earlier] = await transaction
    .select({ id: blobs.id })
    .from(blobs)
    .where(and(eq(blobs.groupId, actor.groupId), eq(blobs.sha256, file.sha256)))
    .for("update");
  if (earlier && earlier.id !== file.blobId) {
    unused.push(file.blobId);
    return earlier.id;
  }
  await transaction.update(blobs).set({ sha256: file.sha256, bytes: file.bytes, complete: true }).where(eq(blobs.id, file.blobId));
  return file.blobId;
}

/** A reading that still waits will see the new archives too; one that runs has looked already. */
async function ingestJob(transaction: Transaction, actor: Actor, runId: string): Promise<string> {
  const [waiting] = await transaction
    .select({ id: jobs.id })
    .from(jobs)
    .where(and(eq(jobs.runId, runId), eq(jobs.groupId, actor.groupId), eq(jobs.kind, "ingest"), eq(jobs.state, "queued")))
    .limit(1)
    .for("update", { skipLocked: true });
  return waiting?.id ?? enqueueJob(transaction, { groupId: actor.groupId, userId: actor.userId, payload: { kind: "ingest", runId } });
}

async function latestIngest(transaction: Transaction, actor: Actor, runId: string): Promise<{ id: string } | null> {
  const [under] = await transaction
    .select({ id: jobs.id })
    .from(jobs)
    .where(and(eq(jobs.runId, runId), eq(jobs.groupId, actor.groupId), eq(jobs.kind, "ingest")))
    .orderBy(desc(jobs.createdAt))
    .limit(1);
  return under ?? null;
}
