import { mysqlTable, varchar } from "drizzle-orm/mysql-core";
import { id, moment } from "./columns";

export const users = mysqlTable("users", {
  id: id().primaryKey(),
  /** Lower-cased at the door. */
  email: varchar({ length: 254 }).notNull().unique(),
  name: varchar({ length: 120 }).notNull(),
  passwordHash: varchar({ length: 100 }).notNull(),
  createdAt: moment().notNull(),
});
