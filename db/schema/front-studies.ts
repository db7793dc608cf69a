import { index, mysqlEnum, mysqlTable } from "drizzle-orm/mysql-core";
import { analyses } from "./analyses";
import { id, jsonText, moment } from "./columns";
import { groups } from "./groups";
import { users } from "./users";

/** What is asked about a finished analysis: how much hangs on a choice, what a nearest-neighbour cone would give, whether the error bars are right here. */
export type StudyParameters =
  | { kind: "sweep" }
  | { kind: "null-front"; model: "xy" | "ising"; jMaxHz: number | null; repeats: number; seed: number }
  | { kind: "self-test"; repeats: number; seed: number };

export type StudyKind = StudyParameters["kind"];

/** A study of one analysis; its state is its job's. */
export const frontStudies = mysqlTable(
  "front_studies",
  {
    id: id().primaryKey(),
    groupId: id().notNull().references(() => groups.id),
    analysisId: id().notNull().references(() => analyses.id, { onDelete: "cascade" }),
    kind: mysqlEnum(["sweep", "null-front", "self-test"]).notNull(),
    parameters: jsonText<StudyParameters>()().notNull(),
    /** Null until the job is done; its shape follows the kind. */
    result: jsonText<Record<string, unknown>>()(),
    jobId: id().notNull(),
    createdBy: id().notNull().references(() => users.id),
    createdAt: moment().notNull(),
    finishedAt: moment(),
  },
  (table) => [
    /** Front page: the latest studies of one analysis. */
    index("front_studies_by_analysis").on(table.groupId, table.analysisId, table.createdAt),
  ],
);
