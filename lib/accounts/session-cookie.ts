import "server-only";
import { randomBytes } from "node:crypto";
import { sealData, unsealData } from "iron-session";

export const SESSION_COOKIE = "strandline_session";

/**
 * A fixed end, not a sliding one: no write at each request, and a copied cookie dies on a known day. A month spares a
 * laboratory's shared screens a daily sign-in; deleting the row ends a session at once.
 */
export const SESSION_DAYS = 30;

const MAX_AGE_S = SESSION_DAYS * 24 * 3600;

/** A cookie as `cookies().set` takes it. */
export interface SessionCookie {
  name: string;
  value: string;
  options: { httpOnly: true; sameSite: "lax"; secure: boolean; path: "/"; maxAge: number };
}

/** Returns the cookie that seals a session's id. */
export async function sealedCookie(sessionId: string): Promise<SessionCookie> {
  return cookieWith(await sealData({ sessionId }, { password: sessionSecret(), ttl: MAX_AGE_S }), MAX_AGE_S);
}

/** Returns the cookie that makes a browser forget its session. */
export function forgottenCookie(): SessionCookie {
  return cookieWith("", 0);
}

/** Returns the session id in a cookie's value, or null when the seal is broken, too old, or not ours. */
export async function unsealedSessionId(value: string): Promise<string | null> {
  const sealed = await unsealData<{ sessionId?: unknown }>(value, { password: sessionSecret(), ttl: MAX_AGE_S });
  return typeof sealed.sessionId === "string" ? sealed.sessionId : null;
}

/** Returns the value of the session cookie in a `Cookie` header, or null. */
export function sessionCookieIn(header: string | null): string | null {
  const prefix = `${SESSION_COOKIE}=`;
  const pair = header?.split(/;\s*/).find((part) => part.startsWith(prefix));
  return pair ? pair.slice(prefix.length) : null;
}

/** Returns the `Set-Cookie` header. */
export function setCookieHeader({ name, value, options }: SessionCookie): string {
  const parts = [`${name}=${value}`, `Path=${options.path}`, `Max-Age=${options.maxAge}`, "HttpOnly", "SameSite=Lax"];
  return [...parts, ...(options.secure ? ["Secure"] : [])].join("; ");
}

/** `Secure` only behind https: other plain-http clients than browsers on loopback would not send the cookie back. */
function cookieWith(value: string, maxAge: number): SessionCookie {
  const secure = process.env.PUBLIC_URL?.startsWith("https://") ?? false;
  return { name: SESSION_COOKIE, value, options: { httpOnly: true, sameSite: "lax", secure, path: "/", maxAge } };
}

const shared = globalThis as typeof globalThis & { strandlineDevelopmentSecret?: string };

/** From `STRANDLINE_SESSION_SECRET`; without it a process in development makes its own, and sign-ins end with it. */
function sessionSecret(): string {
  const secret = process.env.STRANDLINE_SESSION_SECRET;
  if (secret && secret.length >= 32) return secret;
  if (process.env.NODE_ENV === "production") {
    throw new Error("STRANDLINE_SESSION_SECRET needs at least 32 characters; `npm start` sets it");
  }
  return (shared.strandlineDevelopmentSecret ??= randomBytes(32).toString("base64url"));
}
