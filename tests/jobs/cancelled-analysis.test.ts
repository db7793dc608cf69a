import { eq } from "drizzle-orm";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { database } from "@/db/connection";
import { analyses } from "@/db/schema/analyses";
import { resultArrays } from "@/db/schema/result-arrays";
import { CreateAnalysisInput } from "@/lib/analyses/analysis-schemas";
import { createAnalysis } from "@/lib/analyses/create-analysis";
import { createDetection } from "@/lib/detections/create-detection";
import { cancelJob } from "@/lib/jobs/cancel-job";
import { fixture } from "../api/product";
import { must, ownWorld, runWithArchive, untilJob, type OwnWorld } from "./own-world";

let world: OwnWorld;

beforeAll(async () => {
  world = await ownWorld();
  world.startWorker();
});
afterAll(() => world.end());

describe("an analysis that is cancelled while it runs", () => {
  it("ends cancelled within two seconds, stores nothing, and the worker takes the next", async () => {
    const { runId, jobId } = await runWithArchive(world.actor, "shots.npz", fixture("runs/straight-front-24/shots.npz"));
    await untilJob(world.actor, jobId);
    const detection = must(await createDetection(world.actor, runId, { method: "fixed", model: "auto", thresholdScope: "site", threshold: 4.5 }));
    const analyse = async (replicates: number) => must(await createAnalysis(world.actor, runId, CreateAnalysisInput.parse({ detectionId: detection.id, bootstrap: { replicates } })));
    const long = await analyse(20_000);
    await untilJob(world.actor, long.job.id, ({ state, progress }) => state === "running" && progress > 0.05);
    expect(must(await cancelJob(world.actor, long.job.id)).state).toBe("running");
    const began = Date.now();
    expect((await untilJob(world.actor, long.job.id)).state).toBe("cancelled");
    expect(Date.now() - began).toBeLessThan(2_000);
    expect(await database().select({ name: resultArrays.name }).from(resultArrays).where(eq(resultArrays.analysisId, long.analysis.id))).toEqual([]);
    const [{ finishedAt }] = await database().select().from(analyses).where(eq(analyses.id, long.analysis.id));
    expect(finishedAt).toBeNull();
    const short = await analyse(200);
    expect((await untilJob(world.actor, short.job.id)).state).toBe("done");
  });
});
