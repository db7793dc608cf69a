import "server-only";
import type { RowDataPacket } from "mysql2";
import type { Database } from "@/db/connection";

/** Another job is at the same run; this one is put back into the queue for a moment. */
export class TryLater extends Error {
  readonly delay_ms: number;

  constructor(delay_ms: number) {
    super("another job is at this run");
    this.delay_ms = delay_ms;
  }
}

const DELAY_MS = 1_000;

/** Runs `work` while no other process reads the same run. The lock lives with its connection, so a killed worker frees it. */
export async function withRunLock<T>(database: Database, runId: string, work: () => Promise<T>): Promise<T> {
  const connection = await database.$client.getConnection();
  const name = `strandline-run-${runId}`;
  try {
    const [rows] = await connection.query<({ got: number | null } & RowDataPacket)[]>("SELECT GET_LOCK(?, 0) AS got", [name]);
    if (rows[0]?.got !== 1) throw new TryLater(DELAY_MS);
    return await work();
  } finally {
    // A connection that may still hold the lock must not go back to the pool: nobody could read the run any more.
    await connection.query("SELECT RELEASE_LOCK(?)", [name]).then(
      () => connection.release(),
      () => connection.destroy(),
    );
  }
}
