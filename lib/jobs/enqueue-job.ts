import "server-only";
import { newId } from "@/db/new-id";
import { jobs, type JobPayload } from "@/db/schema/jobs";
import type { Executor } from "@/db/transaction";

interface NewJob {
  groupId: string;
  userId: string;
  payload: JobPayload;
}

/** Puts a job into the queue and returns its id. */
export async function enqueueJob(executor: Executor, { groupId, userId, payload }: NewJob): Promise<string> {
  const id = newId();
  const now = new Date();
  await executor.insert(jobs).values({ id, groupId, kind: payload.kind, runId: payload.runId, payload, state: "queued", notBefore: now, createdBy: userId, createdAt: now });
  return id;
}
