import { index, mysqlEnum, mysqlTable, uniqueIndex, varchar } from "drizzle-orm/mysql-core";
import type { Problem } from "@/lib/problem";
import { blobs } from "./blobs";
import { id, jsonText, moment } from "./columns";
import { groups } from "./groups";
import { runs } from "./runs";
import { users } from "./users";

/** An uploaded file of a run; its bytes are a blob. */
export const archives = mysqlTable(
  "archives",
  {
    id: id().primaryKey(),
    groupId: id().notNull().references(() => groups.id),
    runId: id().notNull().references(() => runs.id),
    blobId: id().notNull().references(() => blobs.id),
    filename: varchar({ length: 300 }).notNull(),
    role: mysqlEnum(["shots", "calibration-dark", "calibration-bright"]).notNull(),
    /** Evolution times given beside the file (NPY), µs. */
    timesUs: jsonText<number[]>()(),
    state: mysqlEnum(["waiting", "read", "refused"]).notNull(),
    format: varchar({ length: 40 }),
    problem: jsonText<Problem>()(),
    createdBy: id().notNull().references(() => users.id),
    createdAt: moment().notNull(),
  },
  (table) => [
    /** The archives of a run in order of arrival. */
    index("archives_by_run").on(table.runId, table.createdAt),
    uniqueIndex("archives_once_per_role").on(table.runId, table.blobId, table.role),
  ],
);
