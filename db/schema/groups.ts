import { mysqlTable, varchar } from "drizzle-orm/mysql-core";
import { id, moment } from "./columns";

export const groups = mysqlTable("member_groups", {
  id: id().primaryKey(),
  name: varchar({ length: 120 }).notNull(),
  createdAt: moment().notNull(),
});
