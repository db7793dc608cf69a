import "server-only";
import { and, eq, lt, or, type SQL } from "drizzle-orm";
import type { MySqlColumn } from "drizzle-orm/mysql-core";
import type { Cursor } from "./page-query";

/** Returns the condition for rows after a cursor in a list ordered by creation and id, newest first; undefined for the first page. */
export function afterCursor(table: { createdAt: MySqlColumn; id: MySqlColumn }, cursor: Cursor | undefined): SQL | undefined {
  if (!cursor) return undefined;
  return or(lt(table.createdAt, cursor.createdAt), and(eq(table.createdAt, cursor.createdAt), lt(table.id, cursor.id)));
}
