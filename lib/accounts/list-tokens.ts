import "server-only";
import { and, desc, eq } from "drizzle-orm";
import { database } from "@/db/connection";
import { tokens } from "@/db/schema/tokens";
import { afterCursor } from "@/lib/http/after-cursor";
import { pageOf, type Cursor, type Page } from "@/lib/http/page-query";
import type { Problem } from "@/lib/problem";
import { refusal, type Actor } from "./policy";
import { showToken, type ShownToken } from "./show-token";

/** Returns the member's own tokens in the group, newest first, expired ones too. */
export async function listTokens(actor: Actor, page: { cursor?: Cursor; limit: number }): Promise<Page<ShownToken> | Problem> {
  const refused = refusal(actor, "token.manage");
  if (refused) return refused;
  const rows = await database()
    .select()
    .from(tokens)
    .where(and(eq(tokens.groupId, actor.groupId), eq(tokens.userId, actor.userId), afterCursor(tokens, page.cursor)))
    .orderBy(desc(tokens.createdAt), desc(tokens.id))
    .limit(page.limit + 1);
  return pageOf(rows, page.limit, showToken);
}
