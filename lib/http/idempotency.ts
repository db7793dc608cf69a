import "server-only";
import { createHash } from "node:crypto";
import { and, eq, isNull, lt } from "drizzle-orm";
import { database } from "@/db/connection";
import { idempotencyKeys } from "@/db/schema/idempotency-keys";
import { databaseErrorCode } from "@/db/transaction";
import type { Actor } from "@/lib/accounts/policy";
import { isProblem, problem, type Problem } from "@/lib/problem";
import { json, noContent } from "./answers";

const KEPT_MS = 24 * 3600_000;
/** A call that has not ended by then died with its process. */
const ABANDONED_MS = 6 * 3600_000;
const KEY_FORM = /^[\x21-\x7e]{1,120}$/;

/** What a key is bound to; a streamed body is bound by method, path and query only, since it cannot be hashed beforehand. */
export interface KeyedRequest {
  method: string;
  /** Path and query. */
  target: string;
  bodyText: string;
}

/**
 * Runs `work` once per actor and `Idempotency-Key`: the same request again gets the stored answer, another request
 * under the key or one still running is a `conflict`. Only successes are kept: a refused call did nothing, so its key is free again.
 */
export async function onceByKey(
  actor: Actor,
  key: string,
  request: KeyedRequest,
  work: () => Promise<Response | Problem>,
): Promise<Response | Problem> {
  if (!KEY_FORM.test(key)) {
    const message = "1 to 120 printable ASCII characters without spaces";
    return problem("invalid-input", `Idempotency-Key: ${message}`, [{ where: "Idempotency-Key", message }]);
  }
  const requestHash = createHash("sha256").update(`${request.method}\n${request.target}\n${request.bodyText}`).digest("hex");
  const earlier = await claim(actor, key, requestHash);
  if (earlier) return earlier;
  try {
    return await keepSuccess(actor, key, await work());
  } catch (error) {
    await release(actor, key);
    throw error;
  }
}

const ofActor = (actor: Actor) => and(eq(idempotencyKeys.groupId, actor.groupId), eq(idempotencyKeys.userId, actor.userId));
const ofKey = (actor: Actor, key: string) => and(ofActor(actor), eq(idempotencyKeys.key, key));

/** Returns null when the key is now ours, else the answer of the call that had it first. */
async function claim(actor: Actor, key: string, requestHash: string): Promise<Response | Problem | null> {
  await forgetOld(actor);
  try {
    await database()
      .insert(idempotencyKeys)
      .values({ groupId: actor.groupId, userId: actor.userId, key, requestHash, createdAt: new Date() });
    return null;
  } catch (error) {
    if (databaseErrorCode(error) !== "ER_DUP_ENTRY") throw error;
  }
  const [row] = await database().select().from(idempotencyKeys).where(ofKey(actor, key));
  if (row && row.requestHash !== requestHash) return problem("conflict", "This Idempotency-Key was used for another request.");
  if (!row || row.status === null) {
    return { ...problem("conflict", "The first call with this Idempotency-Key is still running; ask again in a few seconds."), retryAfter_s: 2 };
  }
  return row.status === 204 ? noContent() : json(row.answer, row.status);
}

async function forgetOld(actor: Actor): Promise<void> {
  const before = (age_ms: number) => lt(idempotencyKeys.createdAt, new Date(Date.now() - age_ms));
  await database().delete(idempotencyKeys).where(and(ofActor(actor), before(KEPT_MS)));
  await database().delete(idempotencyKeys).where(and(ofActor(actor), isNull(idempotencyKeys.status), before(ABANDONED_MS)));
}

async function keepSuccess(actor: Actor, key: string, outcome: Response | Problem): Promise<Response | Problem> {
  if (isProblem(outcome) || !outcome.ok) {
    await release(actor, key);
    return outcome;
  }
  const answer: unknown = outcome.status === 204 ? null : await outcome.clone().json();
  await database().update(idempotencyKeys).set({ status: outcome.status, answer }).where(ofKey(actor, key));
  return outcome;
}

async function release(actor: Actor, key: string): Promise<void> {
  await database().delete(idempotencyKeys).where(and(ofKey(actor, key), isNull(idempotencyKeys.status)));
}
