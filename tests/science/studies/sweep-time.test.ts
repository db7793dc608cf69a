import { describe, expect, it } from "vitest";
import { analyseTime } from "@/lib/science/correlators/analyse-time";
import { countUps } from "@/lib/science/correlators/connected-correlators";
import { packSpins } from "@/lib/science/correlators/packed-spins";
import { listPairs } from "@/lib/science/correlators/pairs";
import { planDistanceTraces, planReferenceTraces } from "@/lib/science/correlators/trace-plan";
import { averageVariances } from "@/lib/science/studies/sweep-time";
import { pairVariance } from "@/lib/science/studies/sweep-traces";
import { countedRun } from "./sweep-run";

const run = countedRun(8, 5, 2000, 5, 11);
const spins = packSpins(run.counts[3], run.shots, 8, run.thresholds, "up");
const counts = countUps(spins);

describe("the closed-form error of a trace", () => {
  it("of one pair is √([(1 − a²)(1 − b²) + 4abC − C²]/M), counted shot by shot or from the four outcomes", () => {
    const plan = planReferenceTraces(run.positions, 2);
    const places = listPairs(8);
    averageVariances(spins, counts, plan, null).forEach((variance, q) => {
      const pair = plan.pairs[q];
      expect(variance).toBeCloseTo(pairVariance(counts, places[2 * pair], places[2 * pair + 1], pair), 14);
    });
  });

  it("of a distance average is what the joint bootstrap says, within its own noise of 1/√(2B)", () => {
    const plan = planDistanceTraces(run.positions);
    const { traceError } = analyseTime({ timeIndex: 3, spins, estimator: "plug-in", readout: null, plan, replicates: 2000, seed: 2, interval: "percentile", blockLength: 1, pairErrors: "law" });
    averageVariances(spins, counts, plan, null).forEach((variance, q) => {
      expect(Math.abs(Math.sqrt(variance) / traceError[q] - 1)).toBeLessThan(4 / Math.sqrt(2 * 2000));
    });
  });

  it("of very many pairs is taken over spread shots, and still is what all shots say within a tenth", () => {
    const wide = countedRun(48, 2, 1200, 5, 2);
    const wideSpins = packSpins(wide.counts[1], wide.shots, 48, wide.thresholds, "up");
    const wideCounts = countUps(wideSpins);
    const all = planDistanceTraces(wide.positions);
    const spread = averageVariances(wideSpins, wideCounts, all, null);
    for (const distance of [1, 2, 5]) {
      const trace = distance - 1;
      const alone = { ...all, labels: ["alone"], distances: Float64Array.of(distance), offsets: Uint32Array.of(0, all.offsets[trace + 1] - all.offsets[trace]), pairs: all.pairs.slice(all.offsets[trace], all.offsets[trace + 1]) };
      const [exact] = averageVariances(wideSpins, wideCounts, alone, null);
      expect(Math.abs(Math.sqrt(spread[trace] / exact) - 1)).toBeLessThan(0.1);
      expect(spread[trace]).not.toBe(exact);
    }
  });

  it("grows with the factors of a readout correction as the correlator does", () => {
    const plan = planDistanceTraces(run.positions);
    const plain = averageVariances(spins, counts, plan, null);
    averageVariances(spins, counts, plan, new Float64Array(8).fill(1.1)).forEach((variance, q) => expect(variance).toBeCloseTo(1.1 ** 4 * plain[q], 14));
  });
});
