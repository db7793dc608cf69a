import { index, mysqlTable } from "drizzle-orm/mysql-core";
import { id, moment } from "./columns";
import { groups } from "./groups";
import { users } from "./users";

/** A browser's sign-in; the sealed cookie holds its id, so deleting the row ends it at once. */
export const sessions = mysqlTable(
  "sessions",
  {
    id: id().primaryKey(),
    userId: id().notNull().references(() => users.id),
    groupId: id().notNull().references(() => groups.id),
    createdAt: moment().notNull(),
    expiresAt: moment().notNull(),
  },
  (table) => [
    /** Ends all sessions of one person. */
    index("sessions_by_user").on(table.userId),
  ],
);
