import { int, mysqlTable } from "drizzle-orm/mysql-core";
import { id, moment } from "./columns";

/** Worker processes that say they are alive; a silent one is forgotten after a minute. */
export const workers = mysqlTable("workers", {
  id: id().primaryKey(),
  threads: int().notNull(),
  startedAt: moment().notNull(),
  heartbeatAt: moment().notNull(),
});
