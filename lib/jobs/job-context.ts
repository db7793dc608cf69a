import type { Tinypool } from "tinypool";
import type { Database } from "@/db/connection";
import type { jobs } from "@/db/schema/jobs";
import type { Transaction } from "@/db/transaction";
import type { Problem } from "@/lib/problem";

export type JobRow = typeof jobs.$inferSelect;

/** What a job's work gets from the worker. */
export interface JobContext {
  database: Database;
  /** Says what is happening and how far it is (0 … 1); cheap to call often. */
  progress: (stage: string, fraction: number) => void;
  /** Aborts when the job is cancelled, its lock is lost or the worker ends. */
  signal: AbortSignal;
  /** Threads for computing. */
  pool: Tinypool;
  /**
   * Runs `work` and the job's end in one transaction: results become visible together with `done`, or not at all when
   * the lock has been lost.
   */
  finish: (work: (transaction: Transaction) => Promise<Record<string, unknown>>) => Promise<void>;
}

/** A job that ended on bad input: the problem, and what else is to be written together with it. */
export interface RefusedJob {
  problem: Problem;
  record?: (transaction: Transaction) => Promise<void>;
}

/** Writes down, together with a job's end, that it was given up after breaking too often. */
export type GivenUpRecord = (transaction: Transaction, job: JobRow, problem: Problem) => Promise<void>;

/** Does a job; answers why it was refused, or null when it called `finish`. */
export type JobHandler = (job: JobRow, context: JobContext) => Promise<RefusedJob | null>;
