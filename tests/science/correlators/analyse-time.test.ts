import { describe, expect, it } from "vitest";
import { analyseTime, type TimeTask } from "@/lib/science/correlators/analyse-time";
import { listPairs } from "@/lib/science/correlators/pairs";
import { exactReadoutCorrection, drawReadoutReplicates } from "@/lib/science/correlators/readout-correction";
import { planDistanceTraces, planReferenceTraces, type TracePlan } from "@/lib/science/correlators/trace-plan";
import { bcaInterval, jackknifeAcceleration, percentileInterval, standardDeviation } from "@/lib/science/stats/intervals";
import { plainCorrelator, plainMean, plainMultiplicities } from "@/tests/science/correlators/plain-bootstrap";
import { correlatedSpins, packShots } from "@/tests/science/correlators/spin-samples";

const SEED = 20250117 * 2 ** 20 + 77;

function chain(sites: number) {
  return { x: Float64Array.from({ length: sites }, (_, i) => i), y: null };
}

function task(spins: number[][], plan: TracePlan, changes: Partial<TimeTask> = {}): TimeTask {
  return {
    timeIndex: 5,
    spins: packShots(spins),
    estimator: "plug-in",
    readout: null,
    plan,
    replicates: 70,
    seed: SEED,
    interval: "percentile",
    ...changes,
  };
}

function expectClose(found: ArrayLike<number>, wanted: ArrayLike<number>, tolerance = 1e-12): void {
  expect(found.length).toBe(wanted.length);
  for (let at = 0; at < wanted.length; at++) {
    if (Number.isNaN(wanted[at])) expect(found[at]).toBeNaN();
    else expect(Math.abs(found[at] - wanted[at]), `at ${at}`).toBeLessThanOrEqual(tolerance);
  }
}

/** C_ij of every replicate, `[pair][replicate]`, by plain loops. */
function plainReplicates(spins: number[][], replicates: number, k = 5): number[][] {
  const times = Array.from({ length: replicates }, (_, b) => plainMultiplicities(SEED, k, b, spins.length));
  const pairs = listPairs(spins[0].length);
  return Array.from({ length: pairs.length / 2 }, (_, p) =>
    times.map((weights) => plainCorrelator(spins, weights, pairs[2 * p], pairs[2 * p + 1])),
  );
}

describe("the bootstrap of one time agrees with plain loops over the same draws", () => {
  it.each([
    { sites: 2, shots: 37, replicates: 40 },
    { sites: 5, shots: 203, replicates: 33 },
    { sites: 9, shots: 64, replicates: 70 },
    { sites: 17, shots: 1001, replicates: 35 },
    { sites: 3, shots: 2, replicates: 64 },
  ])("for every pair and mean of $sites sites, $shots shots", ({ sites, shots, replicates }) => {
    const spins = correlatedSpins(shots, sites, sites);
    const result = analyseTime(task(spins, planReferenceTraces(chain(sites), 0), { replicates }));
    const plain = plainReplicates(spins, replicates);
    expectClose(result.error, plain.map(standardDeviation));
    expectClose(result.low, plain.map((values) => percentileInterval(values)[0]));
    expectClose(result.high, plain.map((values) => percentileInterval(values)[1]));
    const times = Array.from({ length: replicates }, (_, b) => plainMultiplicities(SEED, 5, b, shots));
    const means = Array.from({ length: sites }, (_, i) => times.map((weights) => plainMean(spins, weights, i)));
    expectClose(result.meanError, means.map(standardDeviation));
    expectClose(result.traceReplicates, plain.slice(0, sites - 1).flat());
  });
});
