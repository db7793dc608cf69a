import { describe, expect, it } from "vitest";
import { analyseTime, type TimeTask } from "@/lib/science/correlators/analyse-time";
import { bootstrapKernel } from "@/lib/science/correlators/bootstrap-kernel";
import { layOutBootstrap } from "@/lib/science/correlators/bootstrap-layout";
import { planReferenceTraces } from "@/lib/science/correlators/trace-plan";
import { createRandomStream, seedKey, type RandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { packShots } from "@/tests/science/correlators/spin-samples";

const SEED = 77;

/** Multiplicities `[shot][32]` of one block of replicates in runs of `length` shots. */
function drawRuns(shots: number, length: number, block: number, time: number): Uint8Array {
  const layout = layOutBootstrap(shots, 2, 32, 1, 0);
  const kernel = bootstrapKernel(layout.bytes);
  const { key0, key1 } = seedKey(SEED);
  kernel.drawRuns(layout.weights, shots, length, block, time, RANDOM_PURPOSES.bootstrapRuns, key0, key1, layout.scratch);
  return new Uint8Array(kernel.memory.buffer, layout.weights, shots * 32).slice();
}

function drawBelow(bound: number, stream: RandomStream): number {
  const unfair = BigInt(2 ** 32) % BigInt(bound);
  for (;;) {
    const product = BigInt(stream.nextUint32()) * BigInt(bound);
    if ((product & 0xffffffffn) >= unfair) return Number(product >> 32n);
  }
}

/** The same by its definition: shots listed run by run, around the end, until there are as many as before. */
function plainRuns(shots: number, length: number, k: number, b: number): number[] {
  const stream = createRandomStream(SEED, RANDOM_PURPOSES.bootstrapRuns, k, b);
  const held: number[] = [];
  while (held.length < shots) {
    const start = drawBelow(shots, stream);
    for (let n = 0; n < length && held.length < shots; n++) held.push((start + n) % shots);
  }
  const times = Array.from({ length: shots }, () => 0);
  for (const s of held) times[s] += 1;
  return times;
}

describe("runs of consecutive shots", () => {
  it.each([[10, 3], [97, 10], [64, 64], [50, 1], [1000, 37]])("of %i shots by %i are those of the plain twin", (shots, length) => {
    const weights = drawRuns(shots, length, 3, 6);
    for (const r of [0, 5, 31]) {
      const column = Array.from({ length: shots }, (_, s) => weights[32 * s + r]);
      expect(column).toEqual(plainRuns(shots, length, 6, 96 + r));
    }
  });

  // Spins that keep their value for runs of 20 shots carry twenty times less information: errors grow by √20 (common practice, no source).
  it("see what slow drift does to an error bar, and single shots do not", () => {
    const stream = createRandomStream(5, RANDOM_PURPOSES.simulation, 1);
    const slow: number[][] = [];
    for (let n = 0; n < 200; n++) {
      const shared = stream.nextUniform() < 0.5 ? 1 : -1;
      for (let m = 0; m < 20; m++) slow.push([shared, shared]);
    }
    const errorWith = (blockLength: number) => {
      const task: TimeTask = {
        timeIndex: 0,
        spins: packShots(slow),
        estimator: "plug-in",
        readout: null,
        plan: planReferenceTraces({ x: Float64Array.of(0, 1), y: null }, 0),
        replicates: 2000,
        seed: SEED,
        interval: "percentile",
        blockLength,
        pairErrors: "law",
      };
      return analyseTime(task).meanError[0];
    };
    expect(errorWith(1)).toBeCloseTo(1 / Math.sqrt(4000), 3);
    expect(errorWith(400) / errorWith(1)).toBeGreaterThan(3.4);
    expect(errorWith(400) / errorWith(1)).toBeLessThan(5.2);
  });
});
