import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { blocksHash, ownWorld, runWithArchive, untilJob, type OwnWorld } from "./own-world";

let world: OwnWorld;

beforeAll(async () => {
  world = await ownWorld();
  world.startWorker();
});
afterAll(() => world.end());

const SHOTS = 70_000;

/** More counts of one time than a block holds, so that shots out of order must be read back and written anew. */
function csvOf(order: (s: number) => number): Uint8Array {
  const lines = [`time_us,shot,${Array.from({ length: 12 }, (_, i) => `s${i}`).join(",")}`];
  for (let row = 0; row < SHOTS; row++) {
    const s = order(row);
    lines.push(`5,${s},${Array.from({ length: 12 }, (_, i) => (s * 7 + i * 3) % 19).join(",")}`);
  }
  return new TextEncoder().encode(lines.join("\n"));
}

describe("shots out of order", () => {
  it("give the same blocks as shots in order, also beyond one block", async () => {
    const sorted = await runWithArchive(world.actor, "sorted.csv", csvOf((row) => row));
    // 7919 is prime to the number of shots, so every shot comes once.
    const shuffled = await runWithArchive(world.actor, "shuffled.csv", csvOf((row) => (row * 7919) % SHOTS));
    for (const { jobId } of [sorted, shuffled]) expect((await untilJob(world.actor, jobId)).state).toBe("done");
    const blocks = await blocksHash(sorted.runId);
    expect(blocks.rows).toBeGreaterThan(1);
    expect(await blocksHash(shuffled.runId)).toEqual(blocks);
  });
});
