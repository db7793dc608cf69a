import "server-only";
import { and, eq, gt, isNull, lt, or, type SQL } from "drizzle-orm";
import { database } from "@/db/connection";
import { groups } from "@/db/schema/groups";
import { memberships } from "@/db/schema/memberships";
import { sessions } from "@/db/schema/sessions";
import { tokens, type TokenScope } from "@/db/schema/tokens";
import { users } from "@/db/schema/users";
import type { Actor } from "./policy";
import { unsealedSessionId } from "./session-cookie";
import { tokenHash } from "./token-secret";

export const ALL_SCOPES: readonly TokenScope[] = ["read", "upload", "analyse"];

const USE_NOTED_EVERY_MS = 60_000;

const MEMBER = {
  userId: users.id,
  userName: users.name,
  email: users.email,
  groupId: groups.id,
  groupName: groups.name,
  role: memberships.role,
};

/** Returns who acts through a session cookie's value, or null. Role and membership are today's, not those of the sign-in. */
export async function actorOfSessionCookie(value: string): Promise<Actor | null> {
  const sessionId = await unsealedSessionId(value);
  return sessionId === null ? null : actorOfSession(sessionId);
}

/** Returns who acts through a session, or null when it has ended or the membership has. */
export async function actorOfSession(sessionId: string): Promise<Actor | null> {
  const [row] = await database()
    .select(MEMBER)
    .from(sessions)
    .innerJoin(memberships, sameMember(sessions))
    .innerJoin(users, eq(users.id, sessions.userId))
    .innerJoin(groups, eq(groups.id, sessions.groupId))
    .where(and(eq(sessions.id, sessionId), gt(sessions.expiresAt, new Date())));
  return row ? { ...row, scopes: [...ALL_SCOPES], via: "session", credentialId: sessionId } : null;
}

/** Returns who acts through a token, or null when it is unknown, expired or its owner has left; notes the use. */
export async function actorOfToken(secret: string): Promise<Actor | null> {
  const [row] = await database()
    .select({ ...MEMBER, id: tokens.id, scopes: tokens.scopes, lastUsedAt: tokens.lastUsedAt })
    .from(tokens)
    .innerJoin(memberships, sameMember(tokens))
    .innerJoin(users, eq(users.id, tokens.userId))
    .innerJoin(groups, eq(groups.id, tokens.groupId))
    .where(and(eq(tokens.secretHash, tokenHash(secret)), gt(tokens.expiresAt, new Date())));
  if (!row) return null;
  const { id, lastUsedAt, ...member } = row;
  await noteUse(id, lastUsedAt);
  return { ...member, via: "token", credentialId: id };
}

function sameMember(credential: typeof sessions | typeof tokens): SQL | undefined {
  return and(eq(memberships.groupId, credential.groupId), eq(memberships.userId, credential.userId));
}

/** At most one write a minute and token, so that polling scripts do not write at each call. */
async function noteUse(tokenId: string, lastUsedAt: Date | null): Promise<void> {
  const now = new Date();
  const due = new Date(now.getTime() - USE_NOTED_EVERY_MS);
  if (lastUsedAt !== null && lastUsedAt > due) return;
  await database()
    .update(tokens)
    .set({ lastUsedAt: now })
    .where(and(eq(tokens.id, tokenId), or(isNull(tokens.lastUsedAt), lt(tokens.lastUsedAt, due))));
}
