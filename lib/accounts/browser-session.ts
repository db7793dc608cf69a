import "server-only";
import { cookies } from "next/headers";
import { closeSession, type OpenedSession } from "./open-session";
import { forgottenCookie, SESSION_COOKIE, unsealedSessionId } from "./session-cookie";

/** Hands the browser the cookie of a session that `signIn` opened; for server actions. */
export async function startSession({ cookie }: Pick<OpenedSession, "cookie">): Promise<void> {
  (await cookies()).set(cookie.name, cookie.value, cookie.options);
}

/** Ends this browser's session, row and cookie; for server actions. */
export async function endSession(): Promise<void> {
  const jar = await cookies();
  const value = jar.get(SESSION_COOKIE)?.value;
  const sessionId = value ? await unsealedSessionId(value) : null;
  if (sessionId !== null) await closeSession(sessionId);
  const { name, value: empty, options } = forgottenCookie();
  jar.set(name, empty, options);
}
