import { describe, expect, it } from "vitest";
import { analyseTime, type TimeTask } from "@/lib/science/correlators/analyse-time";
import { planDistanceTraces, planReferenceTraces } from "@/lib/science/correlators/trace-plan";
import { mean, percentileInterval, standardDeviation } from "@/lib/science/stats/intervals";
import { analyseTimeSoftly, type SoftTimeTask } from "@/lib/science/threshold-free/analyse-time-softly";
import type { SoftSpins } from "@/lib/science/threshold-free/soft-spins";
import { plainCorrelator, plainMean, plainMultiplicities } from "@/tests/science/correlators/plain-bootstrap";
import { correlatedSpins, packShots } from "@/tests/science/correlators/spin-samples";
import { OVERLAPPING, softShots } from "@/tests/science/threshold-free/soft-shots";

const SITES = 5;
const chain = { x: Float64Array.from({ length: SITES }, (_, i) => i), y: null };
const FIXED = { timeIndex: 3, plan: planDistanceTraces(chain), estimator: "plug-in", replicates: 500, seed: 21, interval: "percentile", blockLength: 1, pairErrors: "law", lawReplicates: null } as const;

const taskOf = (spins: SoftSpins, changes: Partial<SoftTimeTask> = {}): SoftTimeTask => ({ ...FIXED, spins, ...changes });

/** Soft spins that are the spins. */
function hardSpins(spins: number[][]): SoftSpins {
  const sites = spins[0].length;
  return { shots: spins.length, sites, values: Float64Array.from({ length: sites * spins.length }, (_, at) => spins[at % spins.length][Math.floor(at / spins.length)]) };
}

/** `[s][site]` */
const byShot = ({ shots, sites, values }: SoftSpins) => Array.from({ length: shots }, (_, s) => Array.from({ length: sites }, (_, i) => values[i * shots + s]));

function expectClose(found: ArrayLike<number>, expected: ArrayLike<number>, tolerance: number): void {
  expect(found.length).toBe(expected.length);
  Array.from(found).forEach((value, at) => {
    if (Number.isNaN(expected[at])) expect(value).toBeNaN();
    else expect(Math.abs(value - expected[at])).toBeLessThanOrEqual(tolerance);
  });
}

describe("an evolution time read without thresholds", () => {
  it.each<Partial<TimeTask>>([
    {},
    { interval: "basic" },
    { interval: "bca" },
    { estimator: "unbiased" },
    { blockLength: 7 },
    { pairErrors: "replicates", interval: "bca" },
    { plan: planReferenceTraces(chain, 2) },
    { replicates: 0 },
  ])("is what thresholds give where every count is clear, from the same resamples: %o", (changes) => {
    const spins = correlatedSpins(700, SITES, 4, 3);
    const soft = analyseTimeSoftly(taskOf(hardSpins(spins), changes as Partial<SoftTimeTask>));
    const hard = analyseTime({ ...FIXED, spins: packShots(spins), readout: null, ...changes });
    const { replicates = FIXED.replicates } = changes;
    expect(Array.from(soft.fewFlips)).toEqual(Array.from(hard.fewFlips));
    expect(Array.from(soft.traceFewFlips)).toEqual(Array.from(hard.traceFewFlips));
    for (const key of ["mean", "value", "traceValue", "traceReplicates"] as const) expectClose(soft[key], hard[key], 1e-12);
    // The intervals of traces of one pair are read from the law there, from replicates here.
    for (const key of ["meanError", "error"] as const) expectClose(soft[key], hard[key], 1e-12);
    // BCa asks how many replicates lie below the value, and rounding moves those that are equal to it.
    const bcaOfReplicates = changes.interval === "bca" && changes.pairErrors === "replicates";
    for (const key of ["low", "high"] as const) expectClose(soft[key], hard[key], bcaOfReplicates ? 0.004 : 1e-12);
    for (const key of ["traceError", "traceLow", "traceHigh"] as const) expectClose(soft[key], hard[key], replicates === 0 ? 0 : 0.02);
  });

  it("has the replicates that plain sums over the resampled shots give", () => {
    const spins = softShots(correlatedSpins(300, SITES, 6), OVERLAPPING, 8);
    const readings = byShot(spins);
    const { traceReplicates, meanError, error, low } = analyseTimeSoftly(taskOf(spins, { replicates: 70, pairErrors: "replicates", plan: planReferenceTraces(chain, 1) }));
    const resamples = Array.from({ length: 70 }, (_, b) => plainMultiplicities(FIXED.seed, FIXED.timeIndex, b, 300));
    [0, 2, 3, 4].forEach((j, q) => {
      expectClose(traceReplicates.subarray(70 * q, 70 * (q + 1)), resamples.map((times) => plainCorrelator(readings, times, 1, j)), 1e-12);
    });
    expect(meanError[2]).toBeCloseTo(standardDeviation(resamples.map((times) => plainMean(readings, times, 2))), 12);
    const lastPair = resamples.map((times) => plainCorrelator(readings, times, 3, 4));
    expect(error[9]).toBeCloseTo(standardDeviation(lastPair), 12);
    expect(low[9]).toBeCloseTo(percentileInterval(lastPair)[0], 12);
  });

  it("averages a distance's pairs within each replicate", () => {
    const spins = softShots(correlatedSpins(300, SITES, 6), OVERLAPPING, 8);
    const readings = byShot(spins);
    const { traceReplicates } = analyseTimeSoftly(taskOf(spins, { replicates: 40 }));
    const times = plainMultiplicities(FIXED.seed, FIXED.timeIndex, 33, 300);
    const atThree = (plainCorrelator(readings, times, 0, 3) + plainCorrelator(readings, times, 1, 4)) / 2;
    expect(traceReplicates[2 * 40 + 33]).toBeCloseTo(atThree, 12);
  });

  it("has closed-form errors and intervals that are those of very many replicates", () => {
    const spins = softShots(correlatedSpins(500, SITES, 6), OVERLAPPING, 8);
    const law = analyseTimeSoftly(taskOf(spins));
    const drawn = analyseTimeSoftly(taskOf(spins, { replicates: 40000, pairErrors: "replicates" }));
    // 40 000 replicates know a spread to 0.35 %, and a 2.5 % quantile to 0.0134 spreads (at a normal density); four times that.
    law.error.forEach((error, pair) => expect(Math.abs(error / drawn.error[pair] - 1)).toBeLessThan(0.015));
    law.low.forEach((low, pair) => expect(Math.abs(low - drawn.low[pair])).toBeLessThan(0.054 * law.error[pair]));
    law.high.forEach((high, pair) => expect(Math.abs(high - drawn.high[pair])).toBeLessThan(0.054 * law.error[pair]));
    law.meanError.forEach((error, i) => expect(Math.abs(error / drawn.meanError[i] - 1)).toBeLessThan(0.015));
  });

  it("is the same to the last bit whatever the thread computed before, and after a structured clone", () => {
    const task = taskOf(softShots(correlatedSpins(300, SITES, 6), OVERLAPPING, 8), { replicates: 65, interval: "bca" });
    const first = analyseTimeSoftly(task);
    analyseTimeSoftly(taskOf(softShots(correlatedSpins(900, SITES, 7), OVERLAPPING, 9), { timeIndex: 8, pairErrors: "replicates" }));
    analyseTime({ ...FIXED, spins: packShots(correlatedSpins(200, SITES, 5)), readout: null });
    expect(analyseTimeSoftly(structuredClone(task))).toEqual(first);
  });

  it("finds means and correlators without bias where a threshold would misread one shot in fourteen", () => {
    const truth = correlatedSpins(60000, SITES, 9);
    const soft = analyseTimeSoftly(taskOf(softShots(truth, OVERLAPPING, 10), { replicates: 2 }));
    const exact = analyseTimeSoftly(taskOf(hardSpins(truth), { replicates: 2 }));
    // What the counts add to the spins' own noise is at most the whole error.
    exact.mean.forEach((value, i) => expect(Math.abs(soft.mean[i] - value)).toBeLessThan(4 * soft.meanError[i]));
    exact.value.forEach((value, pair) => expect(Math.abs(soft.value[pair] - value)).toBeLessThan(4 * soft.error[pair]));
    expect(Math.max(...soft.value)).toBeGreaterThan(0.3);
  });

  it("gives p-values that are evenly spread where sites are independent", () => {
    const pValues: number[] = [];
    for (let n = 0; n < 60; n++) {
      const independent = correlatedSpins(400 * SITES, 1, 100 + n).map(([spin]) => spin);
      const shots = Array.from({ length: 400 }, (_, s) => independent.slice(s * SITES, (s + 1) * SITES));
      pValues.push(...analyseTimeSoftly(taskOf(softShots(shots, OVERLAPPING, n), { replicates: 1 })).pValue);
    }
    expect(Math.abs(mean(pValues) - 0.5)).toBeLessThan(4 / Math.sqrt(12 * pValues.length));
    expect(pValues.filter((p) => p < 0.05).length / pValues.length).toBeLessThan(0.085);
  });

  it("has replicates equal to the value and no errors with one shot, and nothing at all without shots", () => {
    const one = analyseTimeSoftly(taskOf({ shots: 1, sites: SITES, values: Float64Array.of(1, -1, 1.2, -1.2, 1) }, { replicates: 3 }));
    expect(Array.from(one.traceReplicates).every((value) => value === 0)).toBe(true);
    expect(one.error.every(Number.isNaN)).toBe(true);
    expect(Array.from(one.mean)).toEqual([1, -1, 1.2, -1.2, 1]);
    const none = analyseTimeSoftly(taskOf({ shots: 0, sites: SITES, values: new Float64Array(0) }, { replicates: 3 }));
    expect([...none.mean, ...none.value, ...none.traceReplicates].every(Number.isNaN)).toBe(true);
  });
});
