import { spawn, type ChildProcess } from "node:child_process";
import { createHash } from "node:crypto";
import { once } from "node:events";
import { setTimeout as sleep } from "node:timers/promises";
import type { RowDataPacket } from "mysql2";
import { createConnection } from "mysql2/promise";
import { closeDatabase, database } from "@/db/connection";
import { migrateDatabase } from "@/db/migrate";
import { newId } from "@/db/new-id";
import { inTransaction } from "@/db/transaction";
import { createGroup } from "@/lib/accounts/create-group";
import { createMember } from "@/lib/accounts/create-member";
import type { Actor } from "@/lib/accounts/policy";
import { addArchives } from "@/lib/archives/add-archives";
import { storeBytes } from "@/lib/archives/store-bytes";
import { getJob } from "@/lib/jobs/get-job";
import { isFinalState, type ShownJob } from "@/lib/jobs/show-job";
import { isProblem, type Problem } from "@/lib/problem";
import { createRun } from "@/lib/runs/create-run";
import { CreateRunInput } from "@/lib/runs/run-schemas";

/** A database of a test's own on the suite's server, so that only the workers it starts take its jobs. */
export interface OwnWorld {
  actor: Actor;
  url: string;
  startWorker: (environment?: Record<string, string>) => ChildProcess;
  /** Kills all workers that still run. */
  killWorkers: () => Promise<void>;
  end: () => Promise<void>;
}

/** Makes the database, its schema and one analyst; this process's verbs use it from then on. */
export async function ownWorld(): Promise<OwnWorld> {
  const served = process.env.DATABASE_URL;
  if (!served) throw new Error("DATABASE_URL is not set; `npm test` sets it");
  const name = `strandline_${newId()}`;
  await runAt(served, `CREATE DATABASE ${name} CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_ci`);
  const url = served.replace(/\/[^/?]+(\?|$)/, `/${name}$1`);
  process.env.DATABASE_URL = url;
  await migrateDatabase(url, "migrations");
  const workers: ChildProcess[] = [];
  const killWorkers = async () => void (await Promise.all(workers.map(killed)));
  return {
    url,
    actor: await makeActor(),
    startWorker: (environment = {}) => {
      const worker = spawn(process.execPath, [".next/worker/main.mjs"], {
        env: { ...process.env, DATABASE_URL: url, STRANDLINE_THREADS: "2", STRANDLINE_JOB_SILENCE_MS: "4000", ...environment },
        stdio: ["ignore", "ignore", "inherit", "ipc"],
      });
      workers.push(worker);
      return worker;
    },
    killWorkers,
    end: async () => {
      await killWorkers();
      await closeDatabase();
      await runAt(served, `DROP DATABASE ${name}`);
      process.env.DATABASE_URL = served;
    },
  };
}

/** On a connection of its own: the server may have been restarted since the last one. */
async function runAt(url: string, statement: string): Promise<void> {
  const connection = await createConnection({ uri: url });
  await connection.query(statement);
  await connection.end();
}

async function makeActor(): Promise<Actor> {
  const groupId = await createGroup(database(), "A group of its own");
  const userId = await inTransaction(database(), (transaction) =>
    createMember(transaction, { groupId, name: "An analyst", email: `${newId()}@test.example`, role: "analyst", passwordHash: "none" }),
  );
  return { userId: must(userId), userName: "An analyst", email: "", groupId, groupName: "", role: "analyst", scopes: ["read", "upload", "analyse"], via: "session", credentialId: "" };
}

/** Returns a verb's answer, which must not be a problem. */
export function must<T>(answer: T | Problem): T {
  if (isProblem(answer)) throw new Error(answer.detail);
  return answer;
}

/** Kills a worker the hard way and waits until it is gone. */
export async function killed(worker: ChildProcess): Promise<void> {
  if (worker.exitCode !== null || worker.signalCode !== null) return;
  worker.kill("SIGKILL");
  await once(worker, "exit");
}

/** Makes a run with one archive and returns run and ingest job. */
export async function runWithArchive(actor: Actor, filename: string, bytes: Uint8Array): Promise<{ runId: string; jobId: string }> {
  const run = must(await createRun(actor, CreateRunInput.parse({ title: filename })));
  const stored = await storeBytes(database(), actor.groupId, (async function* () {
    yield bytes;
  })());
  const added = must(await addArchives(actor, run.id, [{ ...stored, filename }], { role: "shots", times_us: undefined }));
  return { runId: run.id, jobId: added.job?.id ?? "" };
}

/** Waits until the job fits, and returns it. */
export async function untilJob(actor: Actor, jobId: string, fits: (job: ShownJob) => boolean = ({ state }) => isFinalState(state), patience_ms = 60_000): Promise<ShownJob> {
  const deadline = Date.now() + patience_ms;
  for (;;) {
    const job = must(await getJob(actor, jobId));
    if (fits(job)) return job;
    if (Date.now() > deadline) throw new Error(`the job is still ${job.state} at ${job.stage}`);
    await sleep(20);
  }
}

/** Returns one hash over rows of bytes, in the order of the query. */
export async function hashOf(query: string, values: (string | number)[]): Promise<{ rows: number; sha256: string }> {
  const [rows] = await database().$client.query<RowDataPacket[]>(query, values);
  const hash = createHash("sha256");
  for (const row of rows) for (const value of Object.values(row)) hash.update(Buffer.isBuffer(value) ? value : String(value));
  return { rows: rows.length, sha256: hash.digest("hex") };
}

/** All result arrays of an analysis. */
export function resultsHash(analysisId: string) {
  return hashOf("SELECT name, part, dtype, shape, data FROM result_arrays WHERE analysis_id = ? ORDER BY name, part", [analysisId]);
}

/** All shot blocks of a run. */
export function blocksHash(runId: string) {
  return hashOf("SELECT version, time_slot, seq, shots, count_type, data FROM shot_blocks WHERE run_id = ? ORDER BY version, time_slot, seq", [runId]);
}
