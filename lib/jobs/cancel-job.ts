import "server-only";
import { and, eq } from "drizzle-orm";
import { database } from "@/db/connection";
import { jobs } from "@/db/schema/jobs";
import { inTransaction } from "@/db/transaction";
import { refusal, type Actor } from "@/lib/accounts/policy";
import { problem, type Problem } from "@/lib/problem";
import { isFinalState, showJob, type ShownJob } from "./show-job";

/** Asks a job to cancel: a waiting one at once, a running one as soon as its worker hears of it; an ended one stays as it is. */
export async function cancelJob(actor: Actor, jobId: string): Promise<ShownJob | Problem> {
  const refused = refusal(actor, "job.cancel");
  if (refused) return refused;
  return inTransaction(database(), async (transaction) => {
    const ofGroup = and(eq(jobs.id, jobId), eq(jobs.groupId, actor.groupId));
    const [row] = await transaction.select().from(jobs).where(ofGroup).for("update");
    if (!row) return problem("not-found", "There is no such job.");
    if (isFinalState(row.state)) return showJob(row);
    const change = row.state === "queued" ? { state: "cancelled" as const, stage: "cancelled", finishedAt: new Date() } : { cancelRequested: true };
    await transaction.update(jobs).set(change).where(ofGroup);
    return showJob({ ...row, ...change });
  });
}
