import "server-only";
import type { Tinypool } from "tinypool";
import type { Database } from "@/db/connection";
import { newId } from "@/db/new-id";
import { claimJob } from "./claim-job";
import { GIVEN_UP_RECORDS, JOB_HANDLERS } from "./job-handlers";
import { workOnJob } from "./work-on-job";

/** Does all jobs that wait now, one after another, in this process. */
export async function drainQueue(database: Database, pool: Tinypool): Promise<void> {
  for (;;) {
    const lockOwner = newId();
    const job = await claimJob(database, lockOwner);
    if (!job) return;
    await workOnJob(job, lockOwner, { database, pool, handlers: JOB_HANDLERS, givenUpRecords: GIVEN_UP_RECORDS, workerEnds: new AbortController().signal });
  }
}
