import "server-only";
import { and, eq, max } from "drizzle-orm";
import { database } from "@/db/connection";
import { newId } from "@/db/new-id";
import { archives } from "@/db/schema/archives";
import { blobs } from "@/db/schema/blobs";
import { inTransaction, type Transaction } from "@/db/transaction";
import { refusal, type Actor } from "@/lib/accounts/policy";
import { isProblem, type Problem } from "@/lib/problem";
import { findRunInGroup, lockRunInGroup } from "@/lib/runs/find-run";
import { isStranded, latestReading, requestReading } from "@/lib/runs/request-reading";
import type { UploadQuery } from "./archive-schemas";
import type { ReceivedFile } from "./receive-files";
import { removeBlob } from "./store-bytes";

export interface AddedArchives {
  archives: { id: string; filename: string; bytes: number; sha256: string; duplicate: boolean }[];
  job: { id: string } | null;
  /** Every file was part of the run already, and nothing was stored. */
  duplicate: boolean;
}

type AddedArchive = AddedArchives["archives"][number];
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
  const refused = refusal(actor, "archive.upload");
  const unused: string[] = [];
  const added = refused ?? (await inTransaction(database(), async (transaction) => {
    unused.length = 0;
    // The run may have been removed while its archives were on their way.
    const run = await lockRunInGroup(transaction, actor, runId);
    if (isProblem(run)) return run;
    const results: AddedArchive[] = [];
    for (const file of files) results.push(await addArchive(transaction, actor, runId, file, options, unused));
    const duplicate = results.every((result) => result.duplicate);
    return { archives: results, job: await readingOf(transaction, actor, runId, duplicate), duplicate };
  }));
  for (const blobId of isProblem(added) ? files.map((file) => file.blobId) : unused) await removeBlob(database(), blobId);
  return added;
}

async function addArchive(transaction: Transaction, actor: Actor, runId: string, file: ReceivedFile, options: Options, unused: string[]): Promise<AddedArchive> {
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
    createdAt: await nextArrival(transaction, runId),
  });
  return { id, filename, bytes, sha256, duplicate: false };
}

/** Archives are read in the order of their arrival, so no two of a run share a moment. The run is locked meanwhile. */
async function nextArrival(transaction: Transaction, runId: string): Promise<Date> {
  const [last] = await transaction.select({ at: max(archives.createdAt) }).from(archives).where(eq(archives.runId, runId));
  return new Date(Math.max(Date.now(), (last?.at?.getTime() ?? 0) + 1));
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

/** The same bytes again start a reading only when the one they had was cancelled or given up. */
async function readingOf(transaction: Transaction, actor: Actor, runId: string, duplicate: boolean): Promise<{ id: string } | null> {
  if (!duplicate || (await isStranded(transaction, actor, runId))) return { id: await requestReading(transaction, actor, runId) };
  const latest = await latestReading(transaction, actor, runId);
  return latest === null ? null : { id: latest };
}
