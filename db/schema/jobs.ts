import { boolean, double, index, int, mysqlEnum, mysqlTable, varchar } from "drizzle-orm/mysql-core";
import type { Problem } from "@/lib/problem";
import { id, jsonText, moment } from "./columns";
import { groups } from "./groups";
import { users } from "./users";

export type JobPayload =
  | { kind: "ingest"; runId: string }
  | { kind: "analysis"; analysisId: string; runId: string }
  | { kind: "study"; studyId: string; runId: string };

/** Work for the worker processes. Every UPDATE of a running job names `lockedBy`, so that a lost lock cannot write. */
export const jobs = mysqlTable(
  "jobs",
  {
    id: id().primaryKey(),
    groupId: id().notNull().references(() => groups.id),
    kind: mysqlEnum(["ingest", "analysis", "study"]).notNull(),
    runId: id().notNull(),
    payload: jsonText<JobPayload>()().notNull(),
    state: mysqlEnum(["queued", "running", "done", "failed", "cancelled"]).notNull(),
    progress: double().notNull().default(0),
    stage: varchar({ length: 120 }).notNull().default("waiting"),
    attempts: int().notNull().default(0),
    lockedBy: id(),
    heartbeatAt: moment(),
    /** A retried job waits until then. */
    notBefore: moment().notNull(),
    cancelRequested: boolean().notNull().default(false),
    error: jsonText<Problem>()(),
    result: jsonText<Record<string, unknown>>()(),
    createdBy: id().notNull().references(() => users.id),
    createdAt: moment().notNull(),
    startedAt: moment(),
    finishedAt: moment(),
  },
  (table) => [
    /** Claiming: the oldest queued job, or a running one whose worker fell silent. Without it a claim scans all jobs ever. */
    index("jobs_to_claim").on(table.state, table.notBefore, table.createdAt),
    /** Run page: what is under way for one run. */
    index("jobs_by_run").on(table.groupId, table.runId, table.createdAt),
  ],
);
