import "server-only";
import { problem, type Problem } from "@/lib/problem";
import { actorOfSessionCookie, actorOfToken } from "./find-actor";
import type { Actor } from "./policy";
import { sessionCookieIn } from "./session-cookie";
import { looksLikeToken } from "./token-secret";

/** Returns who makes a request: by its bearer token when it has an `Authorization` header, else by the session cookie. */
export async function authenticate(request: Request): Promise<Actor | Problem> {
  const authorization = request.headers.get("authorization");
  if (authorization !== null) return (await actorOfHeader(authorization)) ?? refused("This token is unknown, revoked or expired.");
  const cookie = sessionCookieIn(request.headers.get("cookie"));
  if (cookie === null) return refused("Sign in, or send a token as `Authorization: Bearer …`.");
  return (await actorOfSessionCookie(cookie)) ?? refused("This session has ended; sign in again.");
}

async function actorOfHeader(authorization: string): Promise<Actor | null> {
  const secret = /^Bearer +(\S+) *$/i.exec(authorization)?.[1];
  return secret !== undefined && looksLikeToken(secret) ? actorOfToken(secret) : null;
}

function refused(detail: string): Problem {
  return problem("not-signed-in", detail);
}
