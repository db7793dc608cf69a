import "server-only";
import { and, eq, lt } from "drizzle-orm";
import { database } from "@/db/connection";
import { newId } from "@/db/new-id";
import { sessions } from "@/db/schema/sessions";
import { actorOfSession } from "./find-actor";
import type { Actor } from "./policy";
import { sealedCookie, SESSION_DAYS, type SessionCookie } from "./session-cookie";

export interface OpenedSession {
  actor: Actor;
  /** To be set in the browser. */
  cookie: SessionCookie;
}

/** Makes a session for a member and clears away the person's expired ones; null when the membership has just ended. */
export async function openSession(member: { userId: string; groupId: string }): Promise<OpenedSession | null> {
  const sessionId = newId();
  const createdAt = new Date();
  const expiresAt = new Date(createdAt.getTime() + SESSION_DAYS * 24 * 3600_000);
  await database().delete(sessions).where(and(eq(sessions.userId, member.userId), lt(sessions.expiresAt, createdAt)));
  await database().insert(sessions).values({ id: sessionId, userId: member.userId, groupId: member.groupId, createdAt, expiresAt });
  const actor = await actorOfSession(sessionId);
  return actor && { actor, cookie: await sealedCookie(sessionId) };
}

/** Ends a session: its cookie opens nothing any more, wherever a copy of it is. */
export async function closeSession(sessionId: string): Promise<void> {
  await database().delete(sessions).where(eq(sessions.id, sessionId));
}
