import { availableParallelism } from "node:os";
import { setTimeout as sleep } from "node:timers/promises";
import { Tinypool } from "tinypool";
import { closeDatabase, database } from "@/db/connection";
import { newId } from "@/db/new-id";
import { sweepAbandonedBlobs } from "@/lib/archives/sweep-abandoned-blobs";
import { logUnexpected } from "@/lib/http/log-unexpected";
import { sweepOrphans } from "@/lib/runs/sweep-orphans";
import { claimJob } from "./claim-job";
import { GIVEN_UP_RECORDS, JOB_HANDLERS } from "./job-handlers";
import { workOnJob } from "./work-on-job";
import { announceWorker } from "./worker-presence";

const IDLE_MS = 150;
const LONGEST_PAUSE_MS = 10_000;
const SWEEP_EVERY_MS = 3600_000;

/** One worker process: takes jobs one after another until it is asked to end. */
async function work(ends: AbortSignal): Promise<void> {
  const threads = Number(process.env.STRANDLINE_THREADS) || availableParallelism();
  const id = newId();
  const pool = new Tinypool({ filename: new URL("./thread-task.mjs", import.meta.url).href, minThreads: threads, maxThreads: threads });
  const leave = announceWorker(database(), id, threads);
  console.log(`${new Date().toISOString()} worker ${id} with ${threads} threads`);
  let pause_ms = IDLE_MS;
  let sweptAt = 0;
  while (!ends.aborted) {
    try {
      if (Date.now() - sweptAt > SWEEP_EVERY_MS) {
        await sweepAbandonedBlobs(database());
        await sweepOrphans(database());
        sweptAt = Date.now();
      }
      // A lock owner of its own for every claim: a job that comes back to the same worker cannot be written by its former self.
      const lockOwner = newId();
      const job = await claimJob(database(), lockOwner);
      if (job) await workOnJob(job, lockOwner, { database: database(), pool, handlers: JOB_HANDLERS, givenUpRecords: GIVEN_UP_RECORDS, workerEnds: ends });
      pause_ms = job ? 0 : IDLE_MS;
    } catch (error) {
      logUnexpected("worker", error);
      pause_ms = Math.min(LONGEST_PAUSE_MS, Math.max(IDLE_MS, 2 * pause_ms));
    }
    if (pause_ms > 0) await sleep(pause_ms, undefined, { signal: ends }).catch(() => undefined);
  }
  await leave().catch(() => undefined);
  await pool.destroy();
  await closeDatabase();
}

const ending = new AbortController();
for (const event of ["SIGTERM", "SIGINT", "disconnect"] as const) process.once(event, () => ending.abort());
// The starting process may have gone while this one was still loading.
if (process.connected === false) ending.abort();

work(ending.signal).then(
  () => process.exit(0),
  (error: unknown) => {
    logUnexpected("worker start", error);
    process.exit(1);
  },
);
