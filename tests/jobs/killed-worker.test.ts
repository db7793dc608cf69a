import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { CreateAnalysisInput } from "@/lib/analyses/analysis-schemas";
import { createAnalysis } from "@/lib/analyses/create-analysis";
import { createDetection } from "@/lib/detections/create-detection";
import { fixture } from "../api/product";
import { longCsv } from "./csv-files";
import { blocksHash, killed, must, ownWorld, resultsHash, runWithArchive, untilJob, type OwnWorld } from "./own-world";

const ARCHIVE = "straight-front-24/shots.npz";

let world: OwnWorld;
let runId: string;
let detectionId: string;

beforeAll(async () => {
  world = await ownWorld();
  const worker = world.startWorker();
  const made = await runWithArchive(world.actor, "shots.npz", fixture(`runs/${ARCHIVE}`));
  runId = made.runId;
  expect((await untilJob(world.actor, made.jobId)).state).toBe("done");
  detectionId = must(await createDetection(world.actor, runId, { method: "fixed", model: "auto", thresholdScope: "site", threshold: 4.5 })).id;
  await killed(worker);
});
afterAll(() => world.end());

async function startAnalysis(replicates: number) {
  return must(await createAnalysis(world.actor, runId, CreateAnalysisInput.parse({ detectionId, bootstrap: { replicates, seed: 11 } })));
}

describe("an analysis", () => {
  it("gives the same bytes on 1, 2 and 7 threads", async () => {
    const hashes: string[] = [];
    for (const threads of ["1", "2", "7"]) {
      const worker = world.startWorker({ STRANDLINE_THREADS: threads });
      const { analysis, job } = await startAnalysis(500);
      expect((await untilJob(world.actor, job.id)).state).toBe("done");
      const { rows, sha256 } = await resultsHash(analysis.id);
      expect(rows).toBeGreaterThanOrEqual(14);
      hashes.push(sha256);
      await killed(worker);
    }
    expect(new Set(hashes).size).toBe(1);
  });

  it("whose worker is killed in the middle is finished by another, once, with the same bytes", async () => {
    const undisturbedWorker = world.startWorker();
    const undisturbed = await startAnalysis(6000);
    expect((await untilJob(world.actor, undisturbed.job.id)).state).toBe("done");
    await killed(undisturbedWorker);

    const first = world.startWorker();
    const { analysis, job } = await startAnalysis(6000);
    const running = await untilJob(world.actor, job.id, ({ state, progress }) => state === "running" && progress > 0.1 && progress < 0.8);
    expect(running.state).toBe("running");
    await killed(first);
    const second = world.startWorker();
    const ended = await untilJob(world.actor, job.id);
    expect(ended.state).toBe("done");
    expect(await resultsHash(analysis.id)).toEqual(await resultsHash(undisturbed.analysis.id));
    await killed(second);
  });
});

describe("a reading", () => {
  it("whose worker is killed in the middle is finished by another, once, with the same blocks", async () => {
    const bytes = longCsv();
    const whole = world.startWorker();
    const undisturbed = await runWithArchive(world.actor, "long.csv", bytes);
    expect((await untilJob(world.actor, undisturbed.jobId)).state).toBe("done");
    await killed(whole);

    const first = world.startWorker();
    const disturbed = await runWithArchive(world.actor, "long.csv", longCsv(1));
    await untilJob(world.actor, disturbed.jobId, ({ state, progress }) => state === "running" && progress > 0.1 && progress < 0.9);
    await killed(first);
    const second = world.startWorker();
    const ended = await untilJob(world.actor, disturbed.jobId);
    expect(ended.state).toBe("done");
    const blocks = await blocksHash(disturbed.runId);
    expect(blocks.rows).toBeGreaterThan(10);
    expect(blocks).toEqual(await blocksHash(undisturbed.runId));
    await killed(second);
  });
});
