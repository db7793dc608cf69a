import "server-only";
import { asc, eq } from "drizzle-orm";
import { database } from "@/db/connection";
import { memberships } from "@/db/schema/memberships";
import { users } from "@/db/schema/users";
import { problem, type Problem } from "@/lib/problem";
import { countAttempt, forgetAttempts, uncountAttempt, type AttemptLimit } from "./attempt-limit";
import { openSession, type OpenedSession } from "./open-session";
import { passwordMatches } from "./password";

const WINDOW_MS = 15 * 60_000;
const PER_ADDRESS: AttemptLimit = { purpose: "sign-in:address", attempts: 10, window_ms: WINDOW_MS };
/** A laboratory often shares one network address, so this one is wider; only failures count. */
const PER_CLIENT: AttemptLimit = { purpose: "sign-in:client", attempts: 60, window_ms: WINDOW_MS };

export interface SignInInput {
  email: string;
  password: string;
  /** From `clientAddress(headers)`. */
  clientAddress: string;
}

/** Returns the new session and its cookie. Problems: `not-signed-in`, the same for an unknown address and a wrong password; `too-many-requests`. */
export async function signIn(input: SignInInput): Promise<OpenedSession | Problem> {
  const email = input.email.trim().toLowerCase();
  const limited = (await countAttempt(PER_CLIENT, input.clientAddress)) ?? (await countAttempt(PER_ADDRESS, email));
  if (limited) return limited;
  const member = await memberByPassword(email, input.password);
  const opened = member && (await openSession(member));
  if (!opened) return problem("not-signed-in", "Mail address or password is wrong.");
  await uncountAttempt(PER_CLIENT, input.clientAddress);
  await forgetAttempts(PER_ADDRESS, email);
  return opened;
}

/** Of several groups it is the one joined first. */
async function memberByPassword(email: string, password: string): Promise<{ userId: string; groupId: string } | null> {
  const [row] = await database()
    .select({ userId: users.id, passwordHash: users.passwordHash, groupId: memberships.groupId })
    .from(users)
    .innerJoin(memberships, eq(memberships.userId, users.id))
    .where(eq(users.email, email))
    .orderBy(asc(memberships.createdAt), asc(memberships.groupId))
    .limit(1);
  const matches = await passwordMatches(password, row?.passwordHash ?? null);
  return row && matches ? { userId: row.userId, groupId: row.groupId } : null;
}
