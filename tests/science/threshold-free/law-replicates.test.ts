import { describe, expect, it } from "vitest";
import { sitesPoorlyKnown } from "@/lib/science/correlators/readout-correction";
import { planDistanceTraces } from "@/lib/science/correlators/trace-plan";
import { mean, standardDeviation } from "@/lib/science/stats/intervals";
import { analyseTimeSoftly, type SoftTimeTask } from "@/lib/science/threshold-free/analyse-time-softly";
import { fittedCountLaw, poissonCountLaw } from "@/lib/science/threshold-free/count-laws";
import { drawLawReplicates, fittedMeanErrors } from "@/lib/science/threshold-free/law-replicates";
import { softWeights } from "@/lib/science/threshold-free/soft-weights";
import { plainCorrelator, plainMean, plainMultiplicities } from "@/tests/science/correlators/plain-bootstrap";
import { correlatedSpins } from "@/tests/science/correlators/spin-samples";
import { OVERLAPPING, softShots } from "@/tests/science/threshold-free/soft-shots";

const SITES = 4;
const ERRORS = [
  { dark: 0.03, bright: 0.05 },
  { dark: 0.1, bright: 0.02 },
  { dark: 0, bright: 0 },
  { dark: 0.06, bright: 0.06 },
];
const chain = { x: Float64Array.from({ length: SITES }, (_, i) => i), y: null };

function taskOf(shots: number, replicates: number, pairErrors: "law" | "replicates"): SoftTimeTask {
  const spins = softShots(correlatedSpins(shots, SITES, 6), OVERLAPPING, 8);
  const lawReplicates = drawLawReplicates(ERRORS, "up", 21, replicates);
  return { timeIndex: 2, spins, plan: planDistanceTraces(chain), estimator: "unbiased", replicates, seed: 21, interval: "percentile", blockLength: 1, pairErrors, lawReplicates };
}

describe("uncertain laws of counts", () => {
  it("move the soft spin's mean over a component as a small change of its rate does", () => {
    const law = poissonCountLaw(OVERLAPPING);
    const value = softWeights(law, "up")?.value ?? new Float64Array(0);
    const { dark, bright } = fittedMeanErrors(OVERLAPPING, value, 0.01, 0.02);
    const meanAt = (rate: number) => {
      const shares = poissonCountLaw({ ...OVERLAPPING, dark: rate }).dark;
      return shares.reduce((sum, share, n) => sum + share * value[n], 0);
    };
    expect(dark).toBeCloseTo(Math.abs(meanAt(2.005) - meanAt(1.995)), 7);
    expect(bright).toBeCloseTo(2 * Math.abs(meanAt(8.005) - meanAt(7.995)), 7);
  });

  it("move it by both rates where leakage mixes them, and not at all with a rate of 0", () => {
    const leaking = { ...OVERLAPPING, leakDark: 0.01, leakBright: 0.005 };
    const value = softWeights(fittedCountLaw(leaking), "up")?.value ?? new Float64Array(0);
    const meanAt = (bright: number) => {
      const shares = fittedCountLaw({ ...leaking, bright }).dark;
      return shares.reduce((sum, share, n) => sum + share * (value[n] ?? value[value.length - 1]), 0);
    };
    const onlyBright = fittedMeanErrors(leaking, value, 0, 0.02);
    expect(onlyBright.dark).toBeCloseTo(2 * (meanAt(8.005) - meanAt(7.995)), 7);
    expect(onlyBright.dark).toBeGreaterThan(1e-4);
    expect(fittedMeanErrors({ ...OVERLAPPING, dark: 0 }, value, 0.01, 0).dark).toBe(0);
  });

  it("draw means over both components around −1 and +1, the other way round when bright is down", () => {
    for (const [brightIs, sign] of [["up", 1], ["down", -1]] as const) {
      const { inverseFactor, offset } = drawLawReplicates(ERRORS.slice(0, 1), brightIs, 5, 4000);
      const bright = offset.map((o, b) => o + sign / inverseFactor[b]);
      const dark = offset.map((o, b) => o - sign / inverseFactor[b]);
      expect(Math.abs(mean(bright) - sign)).toBeLessThan((4 * 0.05) / Math.sqrt(4000));
      expect(Math.abs(mean(dark) + sign)).toBeLessThan((4 * 0.03) / Math.sqrt(4000));
      expect(Math.abs(standardDeviation(bright) / 0.05 - 1)).toBeLessThan(0.05);
      expect(Math.abs(standardDeviation(dark) / 0.03 - 1)).toBeLessThan(0.05);
    }
    expect(drawLawReplicates(ERRORS, "up", 5, 40)).toEqual(drawLawReplicates(ERRORS, "up", 5, 40));
  });

  it("are too poorly known, by site, where a replicate's components nearly coincide", () => {
    const wide = { dark: 0.5, bright: 0.5 };
    expect(sitesPoorlyKnown(drawLawReplicates([wide, ERRORS[1], wide], "up", 5, 1000))).toEqual([0, 2]);
  });

  it("are in every replicate of means, pairs and distance averages", () => {
    const task = taskOf(300, 50, "replicates");
    const { traceReplicates, meanError, error } = analyseTimeSoftly(task);
    const { inverseFactor, offset } = drawLawReplicates(ERRORS, "up", 21, 50);
    const { shots, values } = task.spins;
    const readings = Array.from({ length: shots }, (_, s) => Array.from({ length: SITES }, (_, i) => values[i * shots + s]));
    const times = Array.from({ length: 50 }, (_, b) => plainMultiplicities(21, 2, b, shots));
    const pair = (i: number, j: number, b: number) => (plainCorrelator(readings, times[b], i, j) * inverseFactor[i * 50 + b] * inverseFactor[j * 50 + b] * shots) / (shots - 1);
    for (const b of [0, 17, 49]) expect(traceReplicates[50 + b]).toBeCloseTo((pair(0, 2, b) + pair(1, 3, b)) / 2, 12);
    expect(error[3]).toBeCloseTo(standardDeviation(times.map((_, b) => pair(1, 2, b))), 12);
    const means = times.map((shot, b) => (plainMean(readings, shot, 1) - offset[50 + b]) * inverseFactor[50 + b]);
    expect(meanError[1]).toBeCloseTo(standardDeviation(means), 12);
  });

  it("are in the closed-form errors and intervals as in very many replicates", () => {
    const law = analyseTimeSoftly(taskOf(500, 20000, "law"));
    const drawn = analyseTimeSoftly(taskOf(500, 20000, "replicates"));
    // 20 000 replicates know a spread to 0.5 %, and a 2.5 % quantile to 0.019 spreads; four times that.
    law.error.forEach((error, pair) => expect(Math.abs(error / drawn.error[pair] - 1)).toBeLessThan(0.02));
    law.meanError.forEach((error, i) => expect(Math.abs(error / drawn.meanError[i] - 1)).toBeLessThan(0.02));
    law.low.forEach((low, pair) => expect(Math.abs(low - drawn.low[pair])).toBeLessThan(0.076 * law.error[pair]));
    law.high.forEach((high, pair) => expect(Math.abs(high - drawn.high[pair])).toBeLessThan(0.076 * law.error[pair]));
    const exact = analyseTimeSoftly({ ...taskOf(500, 20000, "law"), lawReplicates: null });
    expect(law.error[0]).toBeGreaterThan(1.02 * exact.error[0]);
    expect(Array.from(law.value)).toEqual(Array.from(exact.value));
  });
});
