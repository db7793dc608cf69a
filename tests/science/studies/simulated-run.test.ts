import { describe, expect, it } from "vitest";
import { analyseTime } from "@/lib/science/correlators/analyse-time";
import { collectTraces } from "@/lib/science/correlators/collect-traces";
import { wordsPerSite, type PackedSpins } from "@/lib/science/correlators/packed-spins";
import { listPairs } from "@/lib/science/correlators/pairs";
import { planDistanceTraces } from "@/lib/science/correlators/trace-plan";
import { analyseFront } from "@/lib/science/front/analyse-front";
import type { FrontResult } from "@/lib/science/front/front-result";
import { DEFAULT_FRONT_FIT_OPTIONS, DEFAULT_FRONT_RULE } from "@/lib/science/front/front-rule";
import { mean, standardDeviation } from "@/lib/science/stats/intervals";
import { createRandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { analyseSimulatedRun, exactTraces, type SimulatedRun } from "@/lib/science/studies/simulated-run";
import { evolve, xyHamiltonian } from "@/lib/science/theory/chebyshev-evolution";
import { powerLawCouplings } from "@/lib/science/theory/couplings";
import { gaussianLawOf } from "@/lib/science/theory/gaussian-law";
import { drawIndex } from "@/lib/science/theory/measured-counts";
import { allDown, connectedSpins, meanSpin, probabilities } from "@/lib/science/theory/spin-state";

const SITES = 8;
const SHOTS = 1000;
const REPEATS = 300;
const times_us = Float64Array.from({ length: 16 }, (_, k) => 0.06 + 0.08 * k);
const traces = planDistanceTraces({ x: Float64Array.from({ length: SITES }, (_, i) => i), y: null });

/** Chances of all outcomes of the long-range XY quench, J_ij = 1/|i − j|, at every time. */
const chances = Array.from(times_us, (time) => probabilities(evolve(xyHamiltonian(SITES, powerLawCouplings(SITES, 1, 1)), allDown(SITES), time)));
const surrogates = chances.map((chance) => {
  const pairs = listPairs(SITES);
  const correlator = Float64Array.from({ length: pairs.length / 2 }, (_, pair) => connectedSpins(chance, pairs[2 * pair], pairs[2 * pair + 1]));
  return gaussianLawOf({ mean: Float64Array.from({ length: SITES }, (_, i) => meanSpin(chance, i)), correlator });
});

const run: SimulatedRun = {
  laws: surrogates.map(({ law }) => law),
  purpose: RANDOM_PURPOSES.simulation,
  times_us,
  shotsPerTime: new Float64Array(times_us.length).fill(SHOTS),
  readoutErrors: null,
  readoutCorrected: false,
  brightIs: "up",
  estimator: "plug-in",
  interval: "percentile",
  traces,
  rule: DEFAULT_FRONT_RULE,
  options: DEFAULT_FRONT_FIT_OPTIONS,
  replicates: 50,
  seed: 3,
};

/** The same analysis on shots drawn from the state vector itself. */
function analyseExactRun(repeat: number): FrontResult {
  const results = chances.map((chance, k) => {
    const sum = { total: 0 };
    const cumulative = chance.map((value) => (sum.total += value));
    const stream = createRandomStream(8, RANDOM_PURPOSES.simulation, k, repeat);
    const spins: PackedSpins = { sites: SITES, shots: SHOTS, words: new Uint32Array(SITES * wordsPerSite(SHOTS)) };
    for (let s = 0; s < SHOTS; s++) {
      const outcome = drawIndex(cumulative, stream);
      for (let i = 0; i < SITES; i++) spins.words[i * wordsPerSite(SHOTS) + (s >>> 5)] |= ((outcome >> i) & 1) << (s & 31);
    }
    return analyseTime({
      timeIndex: k,
      spins,
      estimator: "plug-in",
      readout: null,
      plan: traces,
      replicates: 50,
      seed: repeat,
      interval: "percentile",
      blockLength: 1,
      pairErrors: "law",
    });
  });
  return analyseFront(collectTraces(traces, times_us, results, 50), DEFAULT_FRONT_RULE, DEFAULT_FRONT_FIT_OPTIONS).front;
}

function crossingsOf(fronts: FrontResult[], trace: number): Float64Array {
  return Float64Array.from(fronts.flatMap(({ points }) => (points[trace].fitted ? [points[trace].time_us ?? NaN] : [])));
}

describe("runs simulated with a quench's means and pair correlations only", () => {
  it("have its correlators to within 0.001", () => {
    for (const { largestChange } of surrogates) expect(largestChange).toBeLessThan(1e-3);
  });

  it("have the crossing times of shots from the whole state, in mean and in scatter", { timeout: 60_000 }, () => {
    const exact = Array.from({ length: REPEATS }, (_, repeat) => analyseExactRun(repeat));
    const simulated = Array.from({ length: REPEATS }, (_, repeat) => analyseSimulatedRun(run, repeat).front);
    for (const trace of [0, 1, 2, 3, 4, 5, 6]) {
      const [first, second] = [crossingsOf(exact, trace), crossingsOf(simulated, trace)];
      const [spreadFirst, spreadSecond] = [standardDeviation(first), standardDeviation(second)];
      // Four standard errors: of a difference of means, and √(2/(2·300)) = 5.8 % of a ratio of standard deviations.
      expect(Math.abs(mean(first) - mean(second))).toBeLessThan(4 * Math.hypot(spreadFirst, spreadSecond) / Math.sqrt(REPEATS));
      expect(Math.abs(Math.log(spreadSecond / spreadFirst))).toBeLessThan(4 * 0.058);
    }
  });
});

describe("exact traces", () => {
  it("are shrunk by readout unless the analysis corrects it", () => {
    const errors = { falseBright: new Float64Array(SITES).fill(0.1), falseDark: new Float64Array(SITES).fill(0.1) };
    const correlators = surrogates.map(({ correlator }) => correlator);
    const whole = exactTraces(run, correlators);
    exactTraces({ ...run, readoutErrors: errors, readoutCorrected: true }, correlators).forEach((value, at) => expect(value).toBe(whole[at]));
    exactTraces({ ...run, readoutErrors: errors }, correlators).forEach((value, at) => expect(value).toBeCloseTo(0.64 * whole[at], 12));
  });
});
