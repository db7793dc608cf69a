import "server-only";
import { setTimeout as sleep } from "node:timers/promises";
import type { Tinypool } from "tinypool";
import type { Database } from "@/db/connection";
import { logUnexpected } from "@/lib/http/log-unexpected";
import { problem } from "@/lib/problem";
import { MOST_ATTEMPTS } from "./claim-job";
import { cancelHeld, finishHeld, heartbeat, LockLost, refuseHeld, returnHeld, type HeldJob } from "./held-job";
import { TryLater } from "./run-lock";
import type { GivenUpRecord, JobContext, JobHandler, JobRow, RefusedJob } from "./job-context";

const HEARTBEAT_MS = 3_000;
const PROGRESS_MS = 200;
const RETRY_DELAY_MS = 2_000;

/** Why the work was stopped from outside. */
type Stop = "cancelled" | "lock lost" | "worker ends";

interface Work {
  database: Database;
  pool: Tinypool;
  handlers: Record<JobRow["kind"], JobHandler>;
  givenUpRecords: Partial<Record<JobRow["kind"], GivenUpRecord>>;
  /** Aborts when the worker is to end. */
  workerEnds: AbortSignal;
}

/** Does one claimed job to its end, whatever that is: done, refused, cancelled, given back, or lost to another worker. */
export async function workOnJob(job: JobRow, lockOwner: string, { database, pool, handlers, givenUpRecords, workerEnds }: Work): Promise<void> {
  const held: HeldJob = { id: job.id, lockOwner };
  const giveUp = () => refuseHeld(database, held, givenUp(job, givenUpRecords[job.kind]));
  if (job.attempts > MOST_ATTEMPTS) return giveUp();
  const stop = new AbortController();
  const pulse = startPulse(database, held, stop);
  const onWorkerEnd = () => stop.abort("worker ends" satisfies Stop);
  workerEnds.addEventListener("abort", onWorkerEnd, { once: true });
  if (workerEnds.aborted) onWorkerEnd();
  const context: JobContext = {
    database,
    pool,
    signal: stop.signal,
    progress: pulse.say,
    finish: async (work) => {
      await pulse.end();
      await finishHeld(database, held, work);
    },
  };
  const outcome = await attempt(handlers[job.kind], job, context, stop);
  await pulse.end();
  workerEnds.removeEventListener("abort", onWorkerEnd);
  await settle(database, held, job, outcome, giveUp).catch((error: unknown) => {
    if (!(error instanceof LockLost)) throw error;
  });
}

type Outcome = { kind: "done" } | { kind: "refused"; refused: RefusedJob } | { kind: "stopped"; stop: Stop } | { kind: "later"; delay_ms: number } | { kind: "fault" };

async function attempt(handler: JobHandler, job: JobRow, context: JobContext, stop: AbortController): Promise<Outcome> {
  try {
    const refused = await handler(job, context);
    return refused ? { kind: "refused", refused } : { kind: "done" };
  } catch (error) {
    if (error instanceof TryLater) return { kind: "later", delay_ms: error.delay_ms };
    if (error instanceof LockLost) return { kind: "stopped", stop: "lock lost" };
    if (stop.signal.aborted) return { kind: "stopped", stop: stop.signal.reason as Stop };
    logUnexpected(`job ${job.kind} ${job.id}`, error);
    return { kind: "fault" };
  }
}

async function settle(database: Database, held: HeldJob, job: JobRow, outcome: Outcome, giveUp: () => Promise<void>): Promise<void> {
  if (outcome.kind === "refused") return refuseHeld(database, held, outcome.refused);
  if (outcome.kind === "stopped" && outcome.stop === "cancelled") return cancelHeld(database, held);
  if (outcome.kind === "stopped" && outcome.stop === "worker ends") return returnHeld(database, held, job.attempts - 1, 0);
  if (outcome.kind === "later") return returnHeld(database, held, job.attempts - 1, outcome.delay_ms);
  if (outcome.kind !== "fault") return;
  if (job.attempts >= MOST_ATTEMPTS) return giveUp();
  return returnHeld(database, held, job.attempts, RETRY_DELAY_MS * job.attempts);
}

function givenUp(job: JobRow, record: GivenUpRecord | undefined): RefusedJob {
  const exhausted = problem("conflict", `This job broke ${MOST_ATTEMPTS} times and was given up. Its cause is in the worker's log; starting it again is safe.`);
  return { problem: exhausted, record: (transaction) => record?.(transaction, job, exhausted) ?? Promise.resolve() };
}

/** Keeps saying that the job is alive and where it stands; a cancel wish or a lost lock aborts the work. */
function startPulse(database: Database, held: HeldJob, stop: AbortController) {
  let stage = "starting";
  let fraction = 0;
  let ended = false;
  let dirty = false;
  let lastSaid = 0;
  const pause = new AbortController();
  const beat = async () => {
    while (!ended) {
      await sleep(PROGRESS_MS, undefined, { ref: false, signal: pause.signal }).catch(() => undefined);
      const due = Date.now() - lastSaid;
      if (ended || (due < HEARTBEAT_MS && !dirty)) continue;
      dirty = false;
      lastSaid = Date.now();
      await heartbeat(database, held, stage, fraction).then(
        ({ cancelRequested }) => cancelRequested && stop.abort("cancelled" satisfies Stop),
        (error: unknown) => error instanceof LockLost && !ended && stop.abort("lock lost" satisfies Stop),
      );
    }
  };
  const beating = beat();
  return {
    say: (newStage: string, newFraction: number) => {
      dirty ||= newStage !== stage || newFraction !== fraction;
      stage = newStage;
      fraction = Math.max(0, Math.min(1, newFraction));
    },
    end: async () => {
      ended = true;
      pause.abort();
      await beating;
    },
  };
}
