import { eq } from "drizzle-orm";
import { setTimeout as sleep } from "node:timers/promises";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { database } from "@/db/connection";
import { resultArrays } from "@/db/schema/result-arrays";
import { shotBlocks } from "@/db/schema/shot-blocks";
import { CreateAnalysisInput } from "@/lib/analyses/analysis-schemas";
import { createAnalysis } from "@/lib/analyses/create-analysis";
import { createDetection } from "@/lib/detections/create-detection";
import { deleteRun } from "@/lib/runs/delete-run";
import { fixture } from "../api/product";
import { must, ownWorld, runWithArchive, untilJob, type OwnWorld } from "./own-world";

let world: OwnWorld;

beforeAll(async () => {
  world = await ownWorld();
  world.startWorker();
});
afterAll(() => world.end());

const ARCHIVE = fixture("runs/xy-chain-12/shots.npz");

describe("a run that is removed in the middle of its analysis", () => {
  it("leaves nothing behind, and the worker goes on with the next job", async () => {
    const removed = await runWithArchive(world.actor, "shots.npz", ARCHIVE);
    await untilJob(world.actor, removed.jobId);
    const detection = must(await createDetection(world.actor, removed.runId, { method: "fixed", model: "auto", thresholdScope: "site", threshold: 4.5 }));
    const started = must(await createAnalysis(world.actor, removed.runId, CreateAnalysisInput.parse({ detectionId: detection.id, bootstrap: { replicates: 15_000 } })));
    await untilJob(world.actor, started.job.id, ({ state, progress }) => state === "running" && progress > 0.1);
    expect(await deleteRun(world.actor, removed.runId)).toBeNull();

    const next = await runWithArchive(world.actor, "shots.npz", ARCHIVE);
    expect((await untilJob(world.actor, next.jobId)).state).toBe("done");
    await sleep(500);
    expect(await database().select({ name: resultArrays.name }).from(resultArrays).where(eq(resultArrays.analysisId, started.analysis.id))).toEqual([]);
    expect(await database().select({ seq: shotBlocks.seq }).from(shotBlocks).where(eq(shotBlocks.runId, removed.runId))).toEqual([]);
  });
});
