import { int, mysqlTable, varchar } from "drizzle-orm/mysql-core";
import { moment } from "./columns";

/** Attempts in a window, shared by all web processes. */
export const rateLimits = mysqlTable("rate_limits", {
  /** What is limited and for whom, e.g. `sign-in:address:…`; hashed where it holds an address. */
  bucket: varchar({ length: 120 }).primaryKey(),
  windowStart: moment().notNull(),
  attempts: int().notNull(),
});
