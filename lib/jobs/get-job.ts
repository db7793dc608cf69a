import "server-only";
import { and, desc, eq } from "drizzle-orm";
import { database } from "@/db/connection";
import { jobs } from "@/db/schema/jobs";
import { refusal, type Actor } from "@/lib/accounts/policy";
import { problem, type Problem } from "@/lib/problem";
import { showJob, type ShownJob } from "./show-job";

/** Returns a job of the member's group. */
export async function getJob(actor: Actor, jobId: string): Promise<ShownJob | Problem> {
  const refused = refusal(actor, "job.read");
  if (refused) return refused;
  const [row] = await database().select().from(jobs).where(and(eq(jobs.id, jobId), eq(jobs.groupId, actor.groupId)));
  return row ? showJob(row) : problem("not-found", "There is no such job.");
}

/** Returns the latest jobs of a run of the member's group, newest first. */
export async function listRunJobs(actor: Actor, runId: string): Promise<ShownJob[] | Problem> {
  const refused = refusal(actor, "job.read");
  if (refused) return refused;
  const rows = await database()
    .select()
    .from(jobs)
    .where(and(eq(jobs.groupId, actor.groupId), eq(jobs.runId, runId)))
    .orderBy(desc(jobs.createdAt))
    .limit(20);
  return rows.map(showJob);
}
