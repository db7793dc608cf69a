import "server-only";
import { and, asc, eq, lt, lte, or } from "drizzle-orm";
import type { Database } from "@/db/connection";
import { jobs } from "@/db/schema/jobs";
import { inTransaction } from "@/db/transaction";
import type { JobRow } from "./job-context";

/** A worker that has said nothing for this long is taken for dead; heartbeats come every 3 s. */
const SILENT_AFTER_MS = Number(process.env.STRANDLINE_JOB_SILENCE_MS) || 15_000;
export const MOST_ATTEMPTS = 3;

/**
 * Takes the oldest job that waits, or one whose worker has fallen silent, for `lockOwner`; null when there is none. Other
 * claimers skip the row while it is being taken, so that no job is taken twice.
 */
export async function claimJob(database: Database, lockOwner: string, now = new Date()): Promise<JobRow | null> {
  return inTransaction(database, async (transaction) => {
    const silentSince = new Date(now.getTime() - SILENT_AFTER_MS);
    const [job] = await transaction
      .select()
      .from(jobs)
      .where(or(and(eq(jobs.state, "queued"), lte(jobs.notBefore, now)), and(eq(jobs.state, "running"), lt(jobs.heartbeatAt, silentSince))))
      .orderBy(asc(jobs.createdAt))
      .limit(1)
      .for("update", { skipLocked: true });
    if (!job) return null;
    const claimed = {
      state: "running" as const,
      lockedBy: lockOwner,
      heartbeatAt: now,
      startedAt: job.startedAt ?? now,
      attempts: job.attempts + 1,
      progress: 0,
      stage: "starting",
    };
    await transaction.update(jobs).set(claimed).where(eq(jobs.id, job.id));
    return { ...job, ...claimed };
  });
}
