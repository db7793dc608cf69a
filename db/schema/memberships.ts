import { index, mysqlEnum, mysqlTable, primaryKey } from "drizzle-orm/mysql-core";
import { id, moment } from "./columns";
import { groups } from "./groups";
import { users } from "./users";

export const memberships = mysqlTable(
  "memberships",
  {
    groupId: id().notNull().references(() => groups.id),
    userId: id().notNull().references(() => users.id),
    role: mysqlEnum(["owner", "analyst", "contributor", "reader"]).notNull(),
    createdAt: moment().notNull(),
  },
  (table) => [
    primaryKey({ columns: [table.groupId, table.userId] }),
    /** Sign-in: the groups of one person. */
    index("memberships_by_user").on(table.userId),
  ],
);
