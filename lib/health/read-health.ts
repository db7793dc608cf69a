import "server-only";
import { gt } from "drizzle-orm";
import { database } from "@/db/connection";
import { workers } from "@/db/schema/workers";

const SILENT_AFTER_MS = 30_000;
const DATABASE_WAIT_MS = 3_000;

export interface Health {
  status: "ok" | "starting" | "unavailable";
  database: "ok" | "unreachable";
  worker: "ok" | "missing" | "unknown";
}

/** Returns what is up: the database, and a worker that was heard of within 30 s. */
export async function readHealth(now = new Date()): Promise<Health> {
  const alive = await Promise.race([anyWorker(now), afterWait()]).catch(() => null);
  if (alive === null) return { status: "unavailable", database: "unreachable", worker: "unknown" };
  return { status: alive ? "ok" : "starting", database: "ok", worker: alive ? "ok" : "missing" };
}

async function anyWorker(now: Date): Promise<boolean> {
  const heardSince = new Date(now.getTime() - SILENT_AFTER_MS);
  const rows = await database().select({ id: workers.id }).from(workers).where(gt(workers.heartbeatAt, heardSince)).limit(1);
  return rows.length > 0;
}

function afterWait(): Promise<null> {
  return new Promise((resolve) => setTimeout(() => resolve(null), DATABASE_WAIT_MS).unref());
}
