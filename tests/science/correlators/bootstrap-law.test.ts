import { describe, expect, it } from "vitest";
import { analyseTime, type TimeTask } from "@/lib/science/correlators/analyse-time";
import { correctedLaw, errorBarOfLaw, factorMoments, isRegular, lawQuantile, lawShareBelow, pairLaw, scaledLaw } from "@/lib/science/correlators/bootstrap-law";
import { groupPairsFor } from "@/lib/science/correlators/group-pairs";
import { pairCount, pairIndex } from "@/lib/science/correlators/pairs";
import { drawReadoutReplicates, exactReadoutCorrection } from "@/lib/science/correlators/readout-correction";
import { planDistanceTraces, planReferenceTraces } from "@/lib/science/correlators/trace-plan";
import { createRandomStream, type RandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { drawBinomial } from "@/lib/science/stats/random-variates";
import { correlatedSpins, packShots } from "@/tests/science/correlators/spin-samples";

type Outcomes = [number, number, number, number];

/** One resample of M shots by the chain of binomials: the plain bootstrap of a pair, whose C needs the four counts only. */
function resample([both, onlyI, onlyJ, neither]: Outcomes, stream: RandomStream): Outcomes {
  const shots = both + onlyI + onlyJ + neither;
  const a = drawBinomial(stream, shots, both / shots);
  const b = drawBinomial(stream, shots - a, onlyI / (shots - both));
  const c = drawBinomial(stream, shots - a - b, onlyJ / (onlyJ + neither));
  return [a, b, c, shots - a - b - c];
}

function correlator([both, onlyI, onlyJ, neither]: Outcomes): number {
  const shots = both + onlyI + onlyJ + neither;
  return (4 * (shots * both - (both + onlyI) * (both + onlyJ))) / shots ** 2;
}

function resampled(outcomes: Outcomes, replicates: number): Float64Array {
  const stream = createRandomStream(11, RANDOM_PURPOSES.simulation, outcomes[0], outcomes[1]);
  return Float64Array.from({ length: replicates }, () => correlator(resample(outcomes, stream))).sort();
}

/** Mean, variance and third central moment over all samples of n shots, each with its multinomial probability. */
function enumerate(outcomes: Outcomes): { mean: number; variance: number } {
  const n = outcomes.reduce((sum, shots) => sum + shots, 0);
  const logFactorial = Array.from({ length: n + 1 }, () => 0);
  for (let m = 2; m <= n; m++) logFactorial[m] = logFactorial[m - 1] + Math.log(m);
  let first = 0;
  let second = 0;
  for (let a = 0; a <= n; a++) {
    for (let b = 0; a + b <= n; b++) {
      for (let c = 0; a + b + c <= n; c++) {
        const drawn: Outcomes = [a, b, c, n - a - b - c];
        const logWays = logFactorial[n] - drawn.reduce((sum, m) => sum + logFactorial[m], 0);
        const weight = Math.exp(logWays + drawn.reduce((sum, m, at) => sum + m * Math.log(outcomes[at] / n), 0));
        const value = correlator(drawn);
        first += weight * value;
        second += weight * value * value;
      }
    }
  }
  return { mean: first, variance: second - first * first };
}

describe("the bootstrap law of a pair", () => {
  it.each([[[3, 1, 2, 4]], [[5, 5, 5, 5]], [[1, 2, 9, 3]]] as [Outcomes][])("has the exact mean and variance: all samples of %j enumerated", (outcomes) => {
    const law = pairLaw(outcomes);
    const exact = enumerate(outcomes);
    expect(law.mean).toBeCloseTo(exact.mean, 12);
    expect(law.deviation ** 2).toBeCloseTo(exact.variance, 12);
  });

  // Monte Carlo noise of a 2.5 % quantile from 200 000 replicates is 0.006 standard errors, the lattice of counts up to 0.1 at 25.
  it.each([[[1000, 1000, 1000, 1000]], [[500, 100, 100, 1300]], [[25, 25, 25, 3925]], [[25, 60, 50, 3865]], [[30, 25, 900, 45]]] as [Outcomes][])(
    "has the quantiles and the median share of 200 000 plain resamples of %j",
    (outcomes) => {
      const values = resampled(outcomes, 200_000);
      const law = pairLaw(outcomes);
      for (const p of [0.025, 0.975]) {
        const plain = values[Math.round(p * values.length)];
        expect(Math.abs(lawQuantile(law, p) - plain) / law.deviation).toBeLessThan(0.085);
      }
      const below = values.filter((value) => value < correlator(outcomes)).length / values.length;
      expect(Math.abs(lawShareBelow(law, correlator(outcomes)) - below)).toBeLessThan(0.01);
    },
  );

  it("holds only where each outcome has at least 25 shots", () => {
    expect(isRegular([25, 25, 25, 25])).toBe(true);
    expect(isRegular([24, 300, 300, 300])).toBe(false);
  });

  it("has no width when a site never flips", () => {
    expect(pairLaw([0, 0, 5, 995])).toEqual({ mean: 0, deviation: 0, skewness: 0, excess: 0 });
  });

  it("turns into basic and BCa limits as replicates do", () => {
    const law = scaledLaw(pairLaw([400, 100, 200, 300]), 2);
    const estimate = 0.8;
    const percentile = errorBarOfLaw(law, estimate, "percentile", 0);
    const basic = errorBarOfLaw(law, estimate, "basic", 0);
    expect(basic.low).toBeCloseTo(1.6 - percentile.high, 14);
    expect(basic.high).toBeCloseTo(1.6 - percentile.low, 14);
    const centred = errorBarOfLaw({ ...law, mean: 0.8, skewness: 0, excess: 0 }, estimate, "bca", 0);
    expect(centred.low).toBeCloseTo(0.8 - 1.959963984540054 * law.deviation, 12);
  });

  it("times a readout factor has the mean and variance of the product", () => {
    const factors = Float64Array.from([1.05, 1.1, 1.2, 1.08]);
    const law = pairLaw([400, 100, 200, 300]);
    const corrected = correctedLaw(law, factorMoments(factors), factorMoments(factors));
    let first = 0;
    let second = 0;
    for (const f of factors) {
      for (const g of factors) {
        first += (law.mean * f * g) / 16;
        second += ((law.mean ** 2 + law.deviation ** 2) * f * f * g * g) / 16;
      }
    }
    expect(corrected.mean).toBeCloseTo(first, 12);
    expect(corrected.deviation).toBeCloseTo(Math.sqrt(second - first * first), 12);
  });
});

const SITES = 9;
const REPLICATES = 4000;
const spins = packShots(correlatedSpins(1500, SITES, 3));
const chain = { x: Float64Array.from({ length: SITES }, (_, i) => i), y: null };
const evidence = {
  falseBrightShots: new Float64Array(SITES).fill(20),
  darkShots: new Float64Array(SITES).fill(500),
  falseDarkShots: new Float64Array(SITES).fill(35),
  brightShots: new Float64Array(SITES).fill(500),
};
const rates = { falseBright: new Float64Array(SITES).fill(0.04), falseDark: new Float64Array(SITES).fill(0.07) };
const readout = { ...exactReadoutCorrection(rates, "up"), replicates: drawReadoutReplicates(evidence, "up", 5, REPLICATES) };

function task(changes: Partial<TimeTask>): TimeTask {
  const plan = planReferenceTraces(chain, 4);
  return { timeIndex: 2, spins, estimator: "unbiased", readout: null, plan, replicates: REPLICATES, seed: 8, interval: "percentile", blockLength: 1, pairErrors: "law", ...changes };
}

describe("errors in closed form", () => {
  // The standard deviation of 4000 replicates has a relative error of 1.1 %, a quantile one of 0.04 standard errors.
  it.each([
    { name: "without a correction", changes: {} },
    { name: "with exact readout errors", changes: { readout: exactReadoutCorrection(rates, "up") } },
    { name: "with drawn readout errors", changes: { readout } },
    { name: "as BCa", changes: { interval: "bca" as const } },
    { name: "as basic intervals", changes: { interval: "basic" as const } },
    { name: "for distance averages", changes: { plan: planDistanceTraces(chain) } },
  ])("agree with the plain joint bootstrap $name", ({ changes }) => {
    const law = analyseTime(task(changes));
    const plain = analyseTime(task({ ...changes, pairErrors: "replicates" }));
    expect(law.value).toEqual(plain.value);
    expect(law.traceReplicates).toEqual(plain.traceReplicates);
    plain.error.forEach((error, pair) => {
      expect(Math.abs(law.error[pair] / error - 1)).toBeLessThan(0.05);
      expect(Math.abs(law.low[pair] - plain.low[pair]) / error).toBeLessThan(0.2);
      expect(Math.abs(law.high[pair] - plain.high[pair]) / error).toBeLessThan(0.2);
    });
    plain.meanError.forEach((error, i) => expect(Math.abs(law.meanError[i] / error - 1)).toBeLessThan(0.06));
    plain.traceError.forEach((error, q) => expect(Math.abs(law.traceError[q] / error - 1)).toBeLessThan(0.05));
  });

  it("leave pairs with rare outcomes to the replicates, to the last bit", () => {
    const rare = packShots(correlatedSpins(1500, SITES, 3).map((shot, s) => shot.map((spin, i) => (i === 7 && s % 90 > 0 ? -1 : spin))));
    const law = analyseTime(task({ spins: rare }));
    const plain = analyseTime(task({ spins: rare, pairErrors: "replicates" }));
    const pair = pairIndex(SITES, 2, 7);
    expect(law.error[pair]).toBe(plain.error[pair]);
    expect(law.low[pair]).toBe(plain.low[pair]);
    expect(law.error[pairIndex(SITES, 1, 2)]).not.toBe(plain.error[pairIndex(SITES, 1, 2)]);
  });
});

describe("the groups of sites that are counted", () => {
  it("hold every needed pair across groups once, and each touched group's own sites once", () => {
    for (const wanted of [[[0, 1]], [[0, 9], [3, 20], [9, 10]], [[0, 4], [0, 8], [0, 12], [0, 16], [0, 20]]]) {
      const needed = new Uint8Array(pairCount(21));
      for (const [i, j] of wanted) needed[pairIndex(21, i, j)] = 1;
      const pairs = groupPairsFor(21, 6, needed);
      const across = pairs.filter((pair) => pair.across).map(({ a, b }) => [Math.min(a, b), Math.max(a, b)].join());
      const own = pairs.filter((pair) => pair.own).map(({ b }) => b);
      expect(new Set(across)).toEqual(new Set(wanted.map(([i, j]) => [i >> 2, j >> 2]).filter(([a, b]) => a !== b).map((ends) => ends.join())));
      expect(across.length).toBe(new Set(across).size);
      expect([...own].sort()).toEqual([...new Set(wanted.flat().map((i) => i >> 2))].sort());
      expect(pairs.every(({ a, b }) => a !== b && a < 6 && b < 6)).toBe(true);
    }
  });
});
