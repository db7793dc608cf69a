import "server-only";
import { DrizzleQueryError } from "drizzle-orm";
import type { Database } from "./connection";

export type Transaction = Parameters<Parameters<Database["transaction"]>[0]>[0];
/** Where a query runs: the pool, or the transaction it is part of. */
export type Executor = Database | Transaction;

const RETRIED = new Set(["ER_LOCK_DEADLOCK", "ER_LOCK_WAIT_TIMEOUT"]);
const MOST_TRIES = 5;

/** Returns MariaDB's error code (such as `ER_DUP_ENTRY`), or null when the error is something else. */
export function databaseErrorCode(error: unknown): string | null {
  const cause = error instanceof DrizzleQueryError ? error.cause : error;
  return typeof cause === "object" && cause !== null && "code" in cause && typeof cause.code === "string" ? cause.code : null;
}

/** Runs `work` in one transaction; a deadlock or lock time-out is tried again up to five times. */
export async function inTransaction<T>(database: Database, work: (transaction: Transaction) => Promise<T>): Promise<T> {
  for (let attempt = 1; ; attempt++) {
    try {
      return await database.transaction(work);
    } catch (error) {
      const code = databaseErrorCode(error);
      if (attempt >= MOST_TRIES || code === null || !RETRIED.has(code)) throw error;
      await new Promise((resolve) => setTimeout(resolve, 20 * 2 ** attempt * (0.5 + Math.random())));
    }
  }
}
