import "server-only";
import { eq, lt } from "drizzle-orm";
import type { Database } from "@/db/connection";
import { workers } from "@/db/schema/workers";

const EVERY_MS = 5_000;
const FORGOTTEN_AFTER_MS = 60_000;

/** Keeps a row saying that this worker is alive; returns a function that ends it and removes the row. */
export function announceWorker(database: Database, id: string, threads: number): () => Promise<void> {
  const startedAt = new Date();
  const say = async () => {
    const heartbeatAt = new Date();
    await database.insert(workers).values({ id, threads, startedAt, heartbeatAt }).onDuplicateKeyUpdate({ set: { heartbeatAt } });
    await database.delete(workers).where(lt(workers.heartbeatAt, new Date(heartbeatAt.getTime() - FORGOTTEN_AFTER_MS)));
  };
  const saySafely = () => void say().catch(() => undefined);
  saySafely();
  const timer = setInterval(saySafely, EVERY_MS);
  return async () => {
    clearInterval(timer);
    await database.delete(workers).where(eq(workers.id, id));
  };
}
