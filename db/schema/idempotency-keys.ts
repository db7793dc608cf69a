import { mysqlTable, primaryKey, smallint, varchar } from "drizzle-orm/mysql-core";
import { id, jsonText, moment, sha256 } from "./columns";

/** The answer a creating POST gave, so that the same call with the same key gets it again (kept a day). */
export const idempotencyKeys = mysqlTable(
  "idempotency_keys",
  {
    groupId: id().notNull(),
    userId: id().notNull(),
    key: varchar({ length: 120 }).notNull(),
    /** Of method, path and body: the key with another request is a conflict. */
    requestHash: sha256().notNull(),
    /** Null while the first call is still running. */
    status: smallint(),
    answer: jsonText<unknown>()(),
    createdAt: moment().notNull(),
  },
  (table) => [primaryKey({ columns: [table.groupId, table.userId, table.key] })],
);
