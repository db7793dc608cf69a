import { eq, sql } from "drizzle-orm";
import { afterAll, afterEach, beforeAll, describe, expect, it } from "vitest";
import { database } from "@/db/connection";
import { newId } from "@/db/new-id";
import { archives } from "@/db/schema/archives";
import { blobs } from "@/db/schema/blobs";
import { jobs } from "@/db/schema/jobs";
import { runVersions } from "@/db/schema/run-versions";
import { shotBlocks } from "@/db/schema/shot-blocks";
import { addArchives } from "@/lib/archives/add-archives";
import { storeBytes } from "@/lib/archives/store-bytes";
import { sweepAbandonedBlobs } from "@/lib/archives/sweep-abandoned-blobs";
import { cancelJob } from "@/lib/jobs/cancel-job";
import { enqueueJob } from "@/lib/jobs/enqueue-job";
import { getRun } from "@/lib/runs/get-run";
import { createRun } from "@/lib/runs/create-run";
import { deleteRun } from "@/lib/runs/delete-run";
import { CreateRunInput } from "@/lib/runs/run-schemas";
import { sweepOrphans } from "@/lib/runs/sweep-orphans";
import { updateRun } from "@/lib/runs/update-run";
import { longCsv, smallCsv } from "./csv-files";
import { must, ownWorld, runWithArchive, untilJob, type OwnWorld } from "./own-world";

let world: OwnWorld;

beforeAll(async () => {
  world = await ownWorld();
});
afterAll(() => world.end());
afterEach(() => world.killWorkers());

const stored = (bytes: Uint8Array) =>
  storeBytes(database(), world.actor.groupId, (async function* () {
    yield bytes;
  })());
const add = async (runId: string, filename: string, bytes: Uint8Array) =>
  must(await addArchives(world.actor, runId, [{ ...(await stored(bytes)), filename }], { role: "shots", times_us: undefined }));
const jobsOf = (runId: string) => database().select().from(jobs).where(eq(jobs.runId, runId));
const versionsOf = (runId: string) => database().select().from(runVersions).where(eq(runVersions.runId, runId));
const blocksOf = (runId: string) => database().select({ seq: shotBlocks.seq }).from(shotBlocks).where(eq(shotBlocks.runId, runId));

describe("a reading that is cancelled while it runs", () => {
  it("ends cancelled, leaves no blocks, and starts again when the same bytes are sent again", async () => {
    world.startWorker();
    const bytes = longCsv();
    const { runId, jobId } = await runWithArchive(world.actor, "long.csv", bytes);
    await untilJob(world.actor, jobId, ({ state, progress }) => state === "running" && progress > 0.1);
    expect(must(await cancelJob(world.actor, jobId)).state).toBe("running");
    expect((await untilJob(world.actor, jobId)).state).toBe("cancelled");
    expect(await blocksOf(runId)).toEqual([]);
    expect(must(await getRun(world.actor, runId))).toMatchObject({ status: "empty", version: 0 });

    const again = await add(runId, "long.csv", bytes);
    expect(again.duplicate).toBe(true);
    expect(again.job?.id).not.toBe(jobId);
    expect((await untilJob(world.actor, again.job?.id ?? "")).state).toBe("done");
    expect(must(await getRun(world.actor, runId))).toMatchObject({ status: "ready", version: 1, latestJobId: again.job?.id });
  });
});

describe("a reading whose run is removed meanwhile", () => {
  it("leaves no blocks behind", async () => {
    world.startWorker();
    const { runId, jobId } = await runWithArchive(world.actor, "long.csv", longCsv(1));
    await untilJob(world.actor, jobId, ({ state, progress }) => state === "running" && progress > 0.1);
    expect(await deleteRun(world.actor, runId)).toBeNull();
    // The next job begins when the worker is through with this one.
    const { jobId: next } = await runWithArchive(world.actor, "small.csv", smallCsv("after the removed one"));
    await untilJob(world.actor, next);
    expect(await blocksOf(runId)).toEqual([]);
  });

  it("and whose worker is killed before it notices leaves blocks only until the next sweep", async () => {
    const { runId: standing, jobId } = await runWithArchive(world.actor, "small.csv", smallCsv("swept"));
    world.startWorker();
    await untilJob(world.actor, jobId);
    await world.killWorkers();
    const runId = newId();
    await database().insert(shotBlocks).values({ runId, version: 1, timeSlot: 0, seq: 0, shots: 1, countType: "uint16", data: Buffer.from([1]) });
    expect(await sweepOrphans(database())).toBe(1);
    expect(await blocksOf(runId)).toEqual([]);
    expect((await blocksOf(standing)).length).toBeGreaterThan(0);
  });
});

describe("archives", () => {
  it("of one request are read in the order they were sent", async () => {
    const run = must(await createRun(world.actor, CreateRunInput.parse({ title: "In order" })));
    const files = await Promise.all(Array.from({ length: 12 }, async (_, q) => ({ ...(await stored(smallCsv(`order-${q}`))), filename: `${q}.csv` })));
    must(await addArchives(world.actor, run.id, files, { role: "shots", times_us: undefined }));
    const shown = must(await getRun(world.actor, run.id));
    expect(shown.archives.map(({ filename }) => filename)).toEqual(files.map(({ filename }) => filename));
    const moments = await database().select({ at: archives.createdAt }).from(archives).where(eq(archives.runId, run.id));
    expect(new Set(moments.map(({ at }) => at.getTime())).size).toBe(12);
  });

  it("that a reading has taken in are not read again by the job that was queued for them", async () => {
    const { runId, jobId } = await runWithArchive(world.actor, "small.csv", smallCsv("taken in"));
    const queued = await enqueueJob(database(), { groupId: world.actor.groupId, userId: world.actor.userId, payload: { kind: "ingest", runId } });
    world.startWorker();
    expect((await untilJob(world.actor, jobId)).state).toBe("done");
    expect((await untilJob(world.actor, queued)).state).toBe("done");
    expect(await versionsOf(runId)).toHaveLength(1);
  });

  it("that were refused for the run's positions are read when the positions are put right", async () => {
    const run = must(await createRun(world.actor, CreateRunInput.parse({ title: "Misplaced", positions: [0, 1, 2] })));
    const { job } = await add(run.id, "small.csv", smallCsv("misplaced"));
    world.startWorker();
    expect((await untilJob(world.actor, job?.id ?? "")).state).toBe("failed");
    const changed = must(await updateRun(world.actor, run.id, { positions: [[0], [1.5]] }));
    expect(changed.status).toBe("ingesting");
    await untilJob(world.actor, changed.latestJobId ?? "");
    expect(must(await getRun(world.actor, run.id))).toMatchObject({ status: "ready", version: 1, problem: null, sites: 2 });
    expect(await jobsOf(run.id)).toHaveLength(2);
  });

  it("of a run that was removed during the upload are not kept", async () => {
    const run = must(await createRun(world.actor, CreateRunInput.parse({ title: "Gone" })));
    const file = { ...(await stored(smallCsv("gone"))), filename: "gone.csv" };
    await deleteRun(world.actor, run.id);
    expect(await addArchives(world.actor, run.id, [file], { role: "shots", times_us: undefined })).toMatchObject({ code: "not-found" });
    expect(await database().select().from(blobs).where(eq(blobs.id, file.blobId))).toEqual([]);
  });
});

describe("a reading that is given up", () => {
  it("marks the run as failed, says why, and starts again when the same bytes are sent again", async () => {
    const bytes = smallCsv("given up");
    const { runId, jobId } = await runWithArchive(world.actor, "small.csv", bytes);
    // As after three workers died at it.
    await database().update(jobs).set({ attempts: 3, state: "running", heartbeatAt: new Date(0), lockedBy: newId() }).where(eq(jobs.id, jobId));
    world.startWorker();
    expect((await untilJob(world.actor, jobId)).state).toBe("failed");
    const run = must(await getRun(world.actor, runId));
    expect(run.status).toBe("failed");
    expect(run.problem?.detail).toContain("3 times");
    const again = await add(runId, "small.csv", bytes);
    expect((await untilJob(world.actor, again.job?.id ?? "")).state).toBe("done");
    expect(must(await getRun(world.actor, runId))).toMatchObject({ status: "ready", problem: null });
  });
});

describe("a worker that is asked to end", () => {
  it("gives its job back at once, without counting the attempt", async () => {
    const worker = world.startWorker();
    const { jobId } = await runWithArchive(world.actor, "long.csv", longCsv(2));
    await untilJob(world.actor, jobId, ({ state, progress }) => state === "running" && progress > 0.1);
    const exit = new Promise<number | null>((resolve) => worker.once("exit", resolve));
    worker.kill("SIGTERM");
    expect(await exit).toBe(0);
    const [row] = await database().select().from(jobs).where(eq(jobs.id, jobId));
    expect(row).toMatchObject({ state: "queued", attempts: 0, lockedBy: null });
    world.startWorker();
    expect((await untilJob(world.actor, jobId)).state).toBe("done");
  });
});

describe("two workers", () => {
  it("share many readings, each done once", async () => {
    const made = await Promise.all(Array.from({ length: 24 }, (_, q) => runWithArchive(world.actor, `${q}.csv`, smallCsv(`shared ${q}`))));
    world.startWorker();
    world.startWorker();
    for (const { jobId } of made) expect((await untilJob(world.actor, jobId)).state).toBe("done");
    for (const { runId } of made) {
      expect(await versionsOf(runId)).toHaveLength(1);
      expect(await jobsOf(runId)).toMatchObject([{ attempts: 1 }]);
    }
  });
});

describe("the sweep", () => {
  it("removes bytes of uploads that never ended a day ago, and nothing else", async () => {
    const [old, young, whole] = await Promise.all(["old", "young", "whole"].map((text) => stored(smallCsv(text))));
    const yesterday = new Date(Date.now() - 25 * 3600_000);
    await database().update(blobs).set({ createdAt: yesterday }).where(eq(blobs.id, old.blobId));
    await database().update(blobs).set({ createdAt: yesterday, complete: true }).where(eq(blobs.id, whole.blobId));
    expect(await sweepAbandonedBlobs(database())).toBe(1);
    const left = await database().select({ id: blobs.id }).from(blobs).where(sql`${blobs.id} in (${old.blobId}, ${young.blobId}, ${whole.blobId})`);
    expect(left.map(({ id }) => id).sort()).toEqual([young.blobId, whole.blobId].sort());
  });
});
