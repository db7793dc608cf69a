import "server-only";
import { and, eq } from "drizzle-orm";
import type { Database } from "@/db/connection";
import { jobs } from "@/db/schema/jobs";
import { inTransaction, type Executor, type Transaction } from "@/db/transaction";
import type { Problem } from "@/lib/problem";
import type { RefusedJob } from "./job-context";

/** The lock on the job was lost: another worker has it, or it was cancelled. Nothing may be written any more. */
export class LockLost extends Error {}

type Change = Partial<typeof jobs.$inferInsert>;

/** A job as its lock's owner may change it. Every UPDATE names the owner, so that a lost lock cannot write. */
export interface HeldJob {
  id: string;
  lockOwner: string;
}

/** Writes to a running job; throws LockLost when it is no longer the owner's. */
export async function updateHeld(executor: Executor, held: HeldJob, change: Change): Promise<void> {
  const [{ affectedRows }] = await executor
    .update(jobs)
    .set(change)
    .where(and(eq(jobs.id, held.id), eq(jobs.lockedBy, held.lockOwner), eq(jobs.state, "running")));
  if (affectedRows !== 1) throw new LockLost(held.id);
}

/** Says that the worker is alive, where the job stands, and returns whether its end was asked for. */
export async function heartbeat(database: Database, held: HeldJob, stage: string, progress: number): Promise<{ cancelRequested: boolean }> {
  await updateHeld(database, held, { heartbeatAt: new Date(), stage: stage.slice(0, 120), progress });
  const [row] = await database.select({ cancelRequested: jobs.cancelRequested }).from(jobs).where(eq(jobs.id, held.id));
  return { cancelRequested: row?.cancelRequested ?? true };
}

/** Runs `work` and marks the job done in one transaction. */
export async function finishHeld(
  database: Database,
  held: HeldJob,
  work: (transaction: Transaction) => Promise<Record<string, unknown>>,
): Promise<void> {
  await inTransaction(database, async (transaction) => {
    // The row stays locked by us until the commit, so nobody can take the job between results and its end.
    await updateHeld(transaction, held, { heartbeatAt: new Date() });
    const result = await work(transaction);
    await updateHeld(transaction, held, { state: "done", progress: 1, stage: "done", result, finishedAt: new Date(), lockedBy: null });
  });
}

/** Ends a job with the problem that stopped it. */
export function failHeld(executor: Executor, held: HeldJob, error: Problem): Promise<void> {
  return updateHeld(executor, held, { state: "failed", error, stage: "failed", finishedAt: new Date(), lockedBy: null });
}

/** Ends a job on bad input, together with what its handler records about it. */
export async function refuseHeld(database: Database, held: HeldJob, { problem, record }: RefusedJob): Promise<void> {
  await inTransaction(database, async (transaction) => {
    await failHeld(transaction, held, problem);
    await record?.(transaction);
  });
}

/** Ends a job whose end was asked for. */
export function cancelHeld(executor: Executor, held: HeldJob): Promise<void> {
  return updateHeld(executor, held, { state: "cancelled", stage: "cancelled", finishedAt: new Date(), lockedBy: null });
}

/** Puts a job back into the queue; a worker that ends in good order does not use up an attempt. */
export function returnHeld(executor: Executor, held: HeldJob, attempts: number, delay_ms: number): Promise<void> {
  return updateHeld(executor, held, { state: "queued", stage: "waiting", progress: 0, lockedBy: null, heartbeatAt: null, attempts, notBefore: new Date(Date.now() + delay_ms) });
}
