import "server-only";
import { database } from "@/db/connection";
import { newId } from "@/db/new-id";
import { tokens } from "@/db/schema/tokens";
import type { Problem } from "@/lib/problem";
import { refusal, type Actor } from "./policy";
import { showToken, type ShownToken } from "./show-token";
import type { CreateTokenInput } from "./token-schemas";
import { newTokenSecret, tokenHash, tokenHint } from "./token-secret";

const DAY_MS = 24 * 3600_000;

/** Makes a token of the member's own; the answer holds the secret, which is shown this once and kept as a hash only. */
export async function createToken(actor: Actor, input: CreateTokenInput): Promise<(ShownToken & { token: string }) | Problem> {
  const refused = refusal(actor, "token.manage");
  if (refused) return refused;
  const secret = newTokenSecret();
  const createdAt = new Date();
  const row = {
    id: newId(),
    name: input.name,
    scopes: input.scopes,
    hint: tokenHint(secret),
    createdAt,
    expiresAt: new Date(createdAt.getTime() + input.expiresInDays * DAY_MS),
    lastUsedAt: null,
  };
  await database().insert(tokens).values({ ...row, groupId: actor.groupId, userId: actor.userId, secretHash: tokenHash(secret) });
  return { ...showToken(row), token: secret };
}
