import "server-only";
import { createHash } from "node:crypto";
import { eq, lt, sql } from "drizzle-orm";
import { database } from "@/db/connection";
import { rateLimits } from "@/db/schema/rate-limits";
import { problem, type Problem } from "@/lib/problem";

const FORGOTTEN_AFTER_MS = 24 * 3600_000;

/** So many attempts in a window that begins with the first. */
export interface AttemptLimit {
  purpose: string;
  attempts: number;
  window_ms: number;
}

/** Counts an attempt of `who`, in one statement for all processes, and returns a Problem when it is one too many. */
export async function countAttempt(limit: AttemptLimit, who: string): Promise<Problem | null> {
  const now = new Date();
  const expired = new Date(now.getTime() - limit.window_ms);
  // MariaDB assigns from left to right: `attempts` still sees the old start of the window.
  const [rows] = await database().execute(sql`
    insert into rate_limits (bucket, window_start, attempts) values (${bucketOf(limit, who)}, ${now}, 1)
    on duplicate key update
      attempts = if(window_start <= ${expired}, 1, attempts + 1),
      window_start = if(window_start <= ${expired}, ${now}, window_start)
    returning attempts, timestampdiff(second, ${expired}, window_start) as left_s`);
  const [{ attempts, left_s }] = rows as unknown as { attempts: number; left_s: number }[];
  if (attempts <= limit.attempts) return null;
  const retryAfter_s = Math.max(1, left_s);
  return { ...problem("too-many-requests", `Try again in ${waitText(retryAfter_s)}.`), retryAfter_s };
}

/** Takes one counted attempt back: it was not a failure. */
export async function uncountAttempt(limit: AttemptLimit, who: string): Promise<void> {
  await database()
    .update(rateLimits)
    .set({ attempts: sql`greatest(attempts - 1, 0)` })
    .where(eq(rateLimits.bucket, bucketOf(limit, who)));
}

/** Forgets all attempts of `who`, and everybody's that are long past. */
export async function forgetAttempts(limit: AttemptLimit, who: string): Promise<void> {
  await database().delete(rateLimits).where(eq(rateLimits.bucket, bucketOf(limit, who)));
  await database().delete(rateLimits).where(lt(rateLimits.windowStart, new Date(Date.now() - FORGOTTEN_AFTER_MS)));
}

/** Hashed, so that the table holds no mail or network addresses. */
function bucketOf(limit: AttemptLimit, who: string): string {
  return `${limit.purpose}:${createHash("sha256").update(who).digest("hex")}`;
}

function waitText(seconds: number): string {
  const minutes = Math.ceil(seconds / 60);
  if (seconds < 60) return `${seconds} s`;
  return minutes === 1 ? "a minute" : `${minutes} minutes`;
}
