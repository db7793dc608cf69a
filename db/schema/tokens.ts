import { index, mysqlTable, varchar } from "drizzle-orm/mysql-core";
import { id, jsonText, moment, sha256 } from "./columns";
import { groups } from "./groups";
import { users } from "./users";

export type TokenScope = "read" | "upload" | "analyse";

/** A script's key; only the SHA-256 of its secret is kept (the secret has 192 random bits, so no slow hash is needed). */
export const tokens = mysqlTable(
  "tokens",
  {
    id: id().primaryKey(),
    groupId: id().notNull().references(() => groups.id),
    userId: id().notNull().references(() => users.id),
    name: varchar({ length: 120 }).notNull(),
    scopes: jsonText<TokenScope[]>()().notNull(),
    secretHash: sha256().notNull().unique(),
    /** The first characters, so that a person can tell tokens apart. */
    hint: varchar({ length: 16 }).notNull(),
    createdAt: moment().notNull(),
    expiresAt: moment().notNull(),
    lastUsedAt: moment(),
  },
  (table) => [
    /** Account page: one member's tokens in one group. */
    index("tokens_by_member").on(table.groupId, table.userId),
  ],
);
