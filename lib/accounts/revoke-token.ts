import "server-only";
import { and, eq } from "drizzle-orm";
import { database } from "@/db/connection";
import { tokens } from "@/db/schema/tokens";
import { problem, type Problem } from "@/lib/problem";
import { refusal, type Actor } from "./policy";

/** Deletes a token of the member's own, at once for every script that has it; `not-found` for anybody else's. */
export async function revokeToken(actor: Actor, tokenId: string): Promise<null | Problem> {
  const refused = refusal(actor, "token.manage");
  if (refused) return refused;
  const [result] = await database()
    .delete(tokens)
    .where(and(eq(tokens.id, tokenId), eq(tokens.groupId, actor.groupId), eq(tokens.userId, actor.userId)));
  return result.affectedRows === 1 ? null : problem("not-found", "You have no token with this id.");
}
