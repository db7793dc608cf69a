import { mkdtempSync, rmSync } from "node:fs";
import os from "node:os";
import path from "node:path";
import { setTimeout as sleep } from "node:timers/promises";
import { eq } from "drizzle-orm";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { closeDatabase, database } from "@/db/connection";
import { jobs } from "@/db/schema/jobs";
import { workers } from "@/db/schema/workers";
import { readHealth } from "@/lib/health/read-health";
import { privateDatabase } from "@/scripts/start/database.mjs";
import { longCsv, smallCsv } from "./csv-files";
import { blocksHash, ownWorld, runWithArchive, untilJob, type OwnWorld } from "./own-world";

const served = process.env.DATABASE_URL;
const directory = mkdtempSync(path.join(os.tmpdir(), "strandline-outage-"));
const start = () => server.start("throw-away", () => undefined);

let server = privateDatabase(directory);
let world: OwnWorld;

/** The suite's server serves others: one of the test's own can be stopped. */
beforeAll(async () => {
  process.env.DATABASE_URL = await start();
  world = await ownWorld();
});
afterAll(async () => {
  await world.end();
  await server.stop();
  rmSync(directory, { recursive: true, force: true });
  process.env.DATABASE_URL = served;
});

async function untilWorkerIsThere(): Promise<void> {
  const deadline = Date.now() + 30_000;
  while ((await readHealth()).worker !== "ok") {
    if (Date.now() > deadline) throw new Error("no worker has announced itself");
    await sleep(50);
  }
}

describe("a worker", () => {
  it("announces itself with its threads, is what health waits for, and takes its row away in good order", async () => {
    expect(await readHealth()).toEqual({ status: "starting", database: "ok", worker: "missing" });
    const worker = world.startWorker({ STRANDLINE_THREADS: "3" });
    await untilWorkerIsThere();
    expect(await database().select({ threads: workers.threads }).from(workers)).toEqual([{ threads: 3 }]);
    const exit = new Promise<number | null>((resolve) => worker.once("exit", resolve));
    worker.kill("SIGTERM");
    expect(await exit).toBe(0);
    expect(await database().select().from(workers)).toEqual([]);
  });

  it("survives a restart of the database in the middle of its job, and does that job once", async () => {
    const worker = world.startWorker();
    const undisturbed = await runWithArchive(world.actor, "long.csv", longCsv(3));
    expect((await untilJob(world.actor, undisturbed.jobId)).state).toBe("done");
    const { runId, jobId } = await runWithArchive(world.actor, "long.csv", longCsv(4));
    await untilJob(world.actor, jobId, ({ state, progress }) => state === "running" && progress > 0.1);
    await server.stop();
    await closeDatabase();
    await sleep(1_500);
    expect((await readHealth()).database).toBe("unreachable");
    server = privateDatabase(directory);
    await start();
    expect((await untilJob(world.actor, jobId)).state).toBe("done");
    expect(worker.exitCode).toBeNull();
    expect(await blocksHash(runId)).toEqual(await blocksHash(undisturbed.runId));
    const [{ attempts }] = await database().select().from(jobs).where(eq(jobs.id, jobId));
    expect(attempts).toBe(2);
    const next = await runWithArchive(world.actor, "small.csv", smallCsv("after the outage"));
    expect((await untilJob(world.actor, next.jobId)).state).toBe("done");
  });
});
