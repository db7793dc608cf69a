import { describe, expect, it } from "vitest";
import { analyseTime, type TimeTask } from "@/lib/science/correlators/analyse-time";
import { listPairs } from "@/lib/science/correlators/pairs";
import { exactReadoutCorrection, drawReadoutReplicates } from "@/lib/science/correlators/readout-correction";
import { planDistanceTraces, planReferenceTraces, type TracePlan } from "@/lib/science/correlators/trace-plan";
import {
  bcaInterval,
  jackknifeAcceleration,
  percentileInterval,
  standardDeviation,
} from "@/lib/science/stats/intervals";
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
    blockLength: 1,
    pairErrors: "replicates",
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
    expectClose(
      result.low,
      plain.map((values) => percentileInterval(values)[0]),
    );
    expectClose(
      result.high,
      plain.map((values) => percentileInterval(values)[1]),
    );
    const times = Array.from({ length: replicates }, (_, b) => plainMultiplicities(SEED, 5, b, shots));
    const means = Array.from({ length: sites }, (_, i) => times.map((weights) => plainMean(spins, weights, i)));
    expectClose(result.meanError, means.map(standardDeviation));
    expectClose(result.traceReplicates, plain.slice(0, sites - 1).flat());
  });

  it("for intervals that need the range split unevenly: ties, and one far value", () => {
    const spins = correlatedSpins(400, 4, 2);
    spins.forEach((shot, s) => {
      shot[3] = s === 0 ? 1 : -1;
    });
    const result = analyseTime(task(spins, planReferenceTraces(chain(4), 0), { replicates: 301 }));
    const plain = plainReplicates(spins, 301);
    expectClose(
      result.low,
      plain.map((values) => percentileInterval(values)[0]),
    );
    expectClose(
      result.high,
      plain.map((values) => percentileInterval(values)[1]),
    );
    expect([...result.fewFlips]).toEqual([0, 0, 1, 0, 1, 1]);
  });

  it("for the unbiased estimator and drawn readout errors", () => {
    const spins = correlatedSpins(150, 5, 4);
    const errors = { falseBright: new Float64Array(5).fill(0.04), falseDark: new Float64Array(5).fill(0.07) };
    const evidence = {
      falseBrightShots: new Float64Array(5).fill(20),
      darkShots: new Float64Array(5).fill(500),
      falseDarkShots: new Float64Array(5).fill(35),
      brightShots: new Float64Array(5).fill(500),
    };
    const replicates = drawReadoutReplicates(evidence, "down", SEED, 70);
    const readout = { ...exactReadoutCorrection(errors, "down"), replicates };
    const plan = planReferenceTraces(chain(5), 2);
    const result = analyseTime(task(spins, plan, { estimator: "unbiased", readout }));
    const pairs = listPairs(5);
    const plain = plainReplicates(spins, 70).map((values, p) =>
      values.map((value, b) => {
        const factors = replicates.inverseFactor;
        return value * (150 / 149) * factors[pairs[2 * p] * 70 + b] * factors[pairs[2 * p + 1] * 70 + b];
      }),
    );
    expectClose(result.error, plain.map(standardDeviation));
    const means = Array.from({ length: 5 }, (_, i) =>
      Array.from({ length: 70 }, (_, b) => {
        const read = plainMean(spins, plainMultiplicities(SEED, 5, b, 150), i);
        return (read - replicates.offset[i * 70 + b]) * replicates.inverseFactor[i * 70 + b];
      }),
    );
    expectClose(result.meanError, means.map(standardDeviation));
  });

  it("for BCa intervals of pairs and of distance-averaged traces", () => {
    const spins = correlatedSpins(120, 4, 21);
    const plan = planDistanceTraces(chain(4));
    const result = analyseTime(task(spins, plan, { interval: "bca", replicates: 400 }));
    const plain = plainReplicates(spins, 400);
    const pairs = listPairs(4);
    const leaveOut = (p: number) =>
      spins.map((_, s) => {
        const times = spins.map((_, other) => (other === s ? 0 : 1));
        return plainCorrelator(spins, times, pairs[2 * p], pairs[2 * p + 1]);
      });
    const wanted = plain.map((values, p) => bcaInterval(result.value[p], values, jackknifeAcceleration(leaveOut(p))));
    expectClose(
      result.low,
      wanted.map((interval) => interval?.[0] ?? Number.NaN),
      1e-9,
    );
    expectClose(
      result.high,
      wanted.map((interval) => interval?.[1] ?? Number.NaN),
      1e-9,
    );
    const average = (rows: number[][]) =>
      rows[0].map((_, n) => rows.reduce((sum, row) => sum + row[n], 0) / rows.length);
    const neighbours = [0, 3, 5];
    const values = average(neighbours.map((p) => plain[p]));
    expectClose(result.traceReplicates.subarray(0, 400), values);
    const interval = bcaInterval(
      result.traceValue[0],
      values,
      jackknifeAcceleration(average(neighbours.map((p) => leaveOut(p)))),
    );
    expect(result.traceLow[0]).toBeCloseTo(interval?.[0] ?? Number.NaN, 9);
    expect(result.traceHigh[0]).toBeCloseTo(interval?.[1] ?? Number.NaN, 9);
    expect(result.traceError[0]).toBeCloseTo(standardDeviation(values), 12);
  });

  it("for more shots than one sum of 16 bits can hold", () => {
    const spins = correlatedSpins(33_000, 2, 6);
    const result = analyseTime(task(spins, planReferenceTraces(chain(2), 0), { replicates: 6 }));
    expectClose(result.traceReplicates, plainReplicates(spins, 6).flat());
  });

  it("for so many replicates that the pairs are counted in several passes", () => {
    const spins = correlatedSpins(20, 33, 9);
    const replicates = 60_000;
    const result = analyseTime(task(spins, planReferenceTraces(chain(33), 30), { replicates }));
    for (const b of [0, 31, 32, 59_999]) {
      const times = plainMultiplicities(SEED, 5, b, 20);
      for (const q of [0, 12, 29, 31]) {
        const j = q < 30 ? q : q + 1;
        expect(result.traceReplicates[q * replicates + b]).toBeCloseTo(plainCorrelator(spins, times, 30, j), 12);
      }
    }
    expect(result.error.every((error) => error > 0)).toBe(true);
  });
});

describe("the errors of a pair", () => {
  // Exact variance of the ideal bootstrap of the plug-in C: full enumeration agrees for small samples.
  it.each([
    { outcomes: [400, 100, 200, 300], delta: 0.0282842712 },
    { outcomes: [520, 110, 130, 240], delta: 0.0281251489 },
    { outcomes: [250, 250, 250, 250], delta: 0.0316227766 },
  ])("of outcomes $outcomes are $delta within Monte Carlo noise", ({ outcomes, delta }) => {
    const kinds = [
      [1, 1],
      [1, -1],
      [-1, 1],
      [-1, -1],
    ];
    const spins = outcomes.flatMap((shots, n) => Array.from({ length: shots }, () => kinds[n]));
    const replicates = 20_000;
    const result = analyseTime(task(spins, planReferenceTraces(chain(2), 0), { replicates }));
    // Five standard errors of a standard deviation, and the 0.1 % by which the delta method is short at M = 1000.
    expect(Math.abs(result.error[0] / delta - 1)).toBeLessThan(5 / Math.sqrt(2 * replicates) + 0.001);
    expect(result.fewFlips[0]).toBe(0);
  });

  it("are exactly 0, never NaN, for a site that never flips, and flagged", () => {
    const spins = correlatedSpins(400, 3, 1, 1);
    const result = analyseTime(task(spins, planReferenceTraces(chain(3), 1), { interval: "bca" }));
    for (const row of [result.value, result.error, result.low, result.high]) expect([row[0], row[2]]).toEqual([0, 0]);
    expect([...result.fewFlips]).toEqual([1, 0, 1]);
    expect([...result.traceFewFlips]).toEqual([1, 1]);
    expect(result.traceReplicates.every((value) => value === 0)).toBe(true);
    expect(result.meanError[1]).toBe(0);
  });

  it("are undefined for one shot, whose replicates equal the value", () => {
    const result = analyseTime(task([[1, -1, 1]], planReferenceTraces(chain(3), 0)));
    expect([...result.value]).toEqual([0, 0, 0]);
    expect([...result.mean]).toEqual([1, -1, 1]);
    for (const row of [result.error, result.low, result.high, result.meanError, result.traceError]) {
      expect(row.every(Number.isNaN)).toBe(true);
    }
    expect(result.traceReplicates.every((value) => value === 0)).toBe(true);
    expect([...result.fewFlips]).toEqual([1, 1, 1]);
  });

  it("are left out of a preview", () => {
    const spins = correlatedSpins(90, 3, 1);
    const preview = analyseTime(task(spins, planReferenceTraces(chain(3), 1), { replicates: 0 }));
    const full = analyseTime(task(spins, planReferenceTraces(chain(3), 1)));
    expect(preview.traceValue).toEqual(full.traceValue);
    expect(preview.traceError.every(Number.isNaN)).toBe(true);
    expect(preview.traceReplicates.length).toBe(0);
  });
});

describe("the result of a time", () => {
  it("is the same to the last bit whatever ran before it, and passes between threads", () => {
    const plan = planDistanceTraces(chain(9));
    const tasks = [300, 41, 1000].map((shots, timeIndex) => ({
      ...task(correlatedSpins(shots, 9, shots), plan),
      timeIndex,
    }));
    const forward = tasks.map(analyseTime);
    const backward = [...tasks]
      .reverse()
      .map((one) => analyseTime(structuredClone(one)))
      .reverse();
    expect(structuredClone(backward)).toEqual(forward);
  });

  it("depends on the seed and on the time", () => {
    const one = task(correlatedSpins(300, 3, 3), planReferenceTraces(chain(3), 0));
    const error = analyseTime(one).error[0];
    expect(analyseTime({ ...one, seed: one.seed + 1 }).error[0]).not.toBe(error);
    expect(analyseTime({ ...one, seed: one.seed + 2 ** 33 }).error[0]).not.toBe(error);
    expect(analyseTime({ ...one, timeIndex: 6 }).error[0]).not.toBe(error);
  });
});
