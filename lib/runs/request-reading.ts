import "server-only";
import { and, desc, eq, inArray } from "drizzle-orm";
import { archives } from "@/db/schema/archives";
import { jobs } from "@/db/schema/jobs";
import type { Transaction } from "@/db/transaction";
import type { Actor } from "@/lib/accounts/policy";
import { enqueueJob } from "@/lib/jobs/enqueue-job";

type Requester = Pick<Actor, "groupId" | "userId">;

/** Has a run's waiting archives read; returns the job. A reading that still waits will see them too, one that runs has looked already. */
export async function requestReading(transaction: Transaction, { groupId, userId }: Requester, runId: string): Promise<string> {
  const [waiting] = await transaction
    .select({ id: jobs.id })
    .from(jobs)
    .where(and(ofRun(groupId, runId), eq(jobs.state, "queued")))
    .limit(1)
    .for("update", { skipLocked: true });
  return waiting?.id ?? enqueueJob(transaction, { groupId, userId, payload: { kind: "ingest", runId } });
}

/** Returns whether an archive waits although nothing will read it: its reading was cancelled or given up. */
export async function isStranded(transaction: Transaction, { groupId }: Requester, runId: string): Promise<boolean> {
  const waiting = await transaction.select({ id: archives.id }).from(archives).where(and(eq(archives.runId, runId), eq(archives.state, "waiting"))).limit(1);
  if (waiting.length === 0) return false;
  const underWay = await transaction.select({ id: jobs.id }).from(jobs).where(and(ofRun(groupId, runId), inArray(jobs.state, ["queued", "running"]))).limit(1);
  return underWay.length === 0;
}

/** Returns the latest reading of a run, or null before the first. */
export async function latestReading(transaction: Transaction, { groupId }: Requester, runId: string): Promise<string | null> {
  const [latest] = await transaction.select({ id: jobs.id }).from(jobs).where(ofRun(groupId, runId)).orderBy(desc(jobs.createdAt)).limit(1);
  return latest?.id ?? null;
}

function ofRun(groupId: string, runId: string) {
  return and(eq(jobs.groupId, groupId), eq(jobs.runId, runId), eq(jobs.kind, "ingest"));
}
