import { double, index, int, mysqlEnum, mysqlTable, text, varchar } from "drizzle-orm/mysql-core";
import type { Problem } from "@/lib/problem";
import { id, jsonText, moment } from "./columns";
import { groups } from "./groups";
import { users } from "./users";

export const runs = mysqlTable(
  "runs",
  {
    id: id().primaryKey(),
    groupId: id().notNull().references(() => groups.id),
    title: varchar({ length: 200 }).notNull(),
    notes: text().notNull(),
    brightIs: mysqlEnum(["up", "down"]).notNull(),
    model: mysqlEnum(["ising", "xy", "other"]).notNull(),
    /** `[site][x]` or `[site][x, y]` as the member gave them; null: from the archive, else 0, 1, 2 … */
    positions: jsonText<number[][]>()(),
    jMaxHz: double(),
    alpha: double(),
    campaign: varchar({ length: 120 }),
    /** Why the latest reading was refused; the version before it still stands. */
    lastProblem: jsonText<Problem>()(),
    /** Number of the current version in run_versions; 0 before the first. */
    currentVersion: int().notNull().default(0),
    createdBy: id().notNull().references(() => users.id),
    createdAt: moment().notNull(),
    updatedAt: moment().notNull(),
  },
  (table) => [
    /** Runs table: a group's runs, newest first. */
    index("runs_by_group").on(table.groupId, table.createdAt),
  ],
);
