import { eq } from "drizzle-orm";
import { afterAll, beforeAll, beforeEach, describe, expect, it } from "vitest";
import { database } from "@/db/connection";
import { newId } from "@/db/new-id";
import { jobs } from "@/db/schema/jobs";
import { cancelJob } from "@/lib/jobs/cancel-job";
import { claimJob } from "@/lib/jobs/claim-job";
import { enqueueJob } from "@/lib/jobs/enqueue-job";
import { finishHeld, LockLost, updateHeld } from "@/lib/jobs/held-job";
import { must, ownWorld, untilJob, type OwnWorld } from "./own-world";

let world: OwnWorld;

beforeAll(async () => {
  world = await ownWorld();
});
afterAll(() => world.end());
beforeEach(async () => {
  await database().delete(jobs);
});

const enqueue = () => enqueueJob(database(), { groupId: world.actor.groupId, userId: world.actor.userId, payload: { kind: "ingest", runId: newId() } });
const rowOf = async (id: string) => (await database().select().from(jobs).where(eq(jobs.id, id)))[0];

describe("claims", () => {
  it("give no job to two claimers, however many ask at once", async () => {
    for (let q = 0; q < 40; q++) await enqueue();
    const claimed: string[] = [];
    const claimer = async () => {
      for (let job = await claimJob(database(), newId()); job; job = await claimJob(database(), newId())) claimed.push(job.id);
    };
    await Promise.all(Array.from({ length: 8 }, claimer));
    expect(claimed).toHaveLength(40);
    expect(new Set(claimed).size).toBe(40);
  });

  it("take a job over when its worker has fallen silent, and count the attempt", async () => {
    const id = await enqueue();
    await claimJob(database(), newId());
    expect(await claimJob(database(), newId())).toBeNull();
    const later = await claimJob(database(), newId(), new Date(Date.now() + 3600_000));
    expect(later?.id).toBe(id);
    expect(later?.attempts).toBe(2);
  });

  it("that were lost cannot write", async () => {
    const id = await enqueue();
    const first = { id, lockOwner: newId() };
    await claimJob(database(), first.lockOwner);
    await claimJob(database(), newId(), new Date(Date.now() + 3600_000));
    await expect(updateHeld(database(), first, { stage: "still mine" })).rejects.toBeInstanceOf(LockLost);
    let wrote = false;
    await expect(
      finishHeld(database(), first, async () => {
        wrote = true;
        return {};
      }),
    ).rejects.toBeInstanceOf(LockLost);
    expect(wrote).toBe(false);
    expect((await rowOf(id)).stage).not.toBe("still mine");
    expect((await rowOf(id)).state).toBe("running");
  });
});

describe("a cancelled job", () => {
  it("ends at once while it waits", async () => {
    const id = await enqueue();
    expect(must(await cancelJob(world.actor, id)).state).toBe("cancelled");
    expect(await claimJob(database(), newId())).toBeNull();
  });

  it("stays done when it is done", async () => {
    const id = await enqueue();
    const held = { id, lockOwner: newId() };
    await claimJob(database(), held.lockOwner);
    await finishHeld(database(), held, async () => ({ answer: 42 }));
    expect(must(await cancelJob(world.actor, id)).state).toBe("done");
  });
});

describe("a worker", () => {
  it("gives up a job that breaks three times, with a plain problem", async () => {
    // An analysis that is filed as a reading breaks its handler: a bug, not bad input.
    const id = await enqueueJob(database(), { groupId: world.actor.groupId, userId: world.actor.userId, payload: { kind: "ingest", runId: newId() } });
    await database().update(jobs).set({ kind: "analysis" }).where(eq(jobs.id, id));
    world.startWorker();
    const ended = await untilJob(world.actor, id, undefined, 60_000);
    expect(ended.state).toBe("failed");
    expect(ended.error?.detail).toContain("3 times");
    expect((await rowOf(id)).attempts).toBe(3);
  });
});
