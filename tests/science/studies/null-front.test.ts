import { describe, expect, it } from "vitest";
import { listPairs } from "@/lib/science/correlators/pairs";
import { planDistanceTraces, planReferenceTraces } from "@/lib/science/correlators/trace-plan";
import type { FrontPoint } from "@/lib/science/front/front-result";
import { DEFAULT_FRONT_FIT_OPTIONS, DEFAULT_FRONT_RULE } from "@/lib/science/front/front-rule";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { frontNumbers } from "@/lib/science/studies/front-numbers";
import { judgeNullFront } from "@/lib/science/studies/judge-null-front";
import { nullFrontRepeat, planNullFront, type NullFrontPlan } from "@/lib/science/studies/null-front";
import type { NullFrontInput } from "@/lib/science/studies/null-front-input";
import type { NullFrontRepeat } from "@/lib/science/studies/null-front-result";
import { analyseSimulatedRun } from "@/lib/science/studies/simulated-run";
import { isStudyRefusal } from "@/lib/science/studies/study-refusal";
import { evolve, xyHamiltonian } from "@/lib/science/theory/chebyshev-evolution";
import { powerLawCouplings } from "@/lib/science/theory/couplings";
import { gaussianLawOf } from "@/lib/science/theory/gaussian-law";
import { allDown, connectedSpins, meanSpin, probabilities } from "@/lib/science/theory/spin-state";

const SITES = 8;
const chain = { x: Float64Array.from({ length: SITES }, (_, i) => i), y: null };
/** 4Jt from 0.1 to 9 over 24 times, J/2π = 1 kHz: the signals of distances 1 to 6 have their maxima inside. */
const times_us = Float64Array.from({ length: 24 }, (_, k) => ((0.1 + (8.9 * k) / 23) / (4 * 2 * Math.PI * 1000)) * 1e6);

function inputOf(changes: Partial<NullFrontInput> = {}): NullFrontInput {
  return {
    model: "xy",
    positions: chain,
    jMax_hz: 1000,
    observedPoints: [],
    times_us,
    shotsPerTime: new Float64Array(times_us.length).fill(400),
    readoutErrors: { falseBright: new Float64Array(SITES).fill(0.01), falseDark: new Float64Array(SITES).fill(0.03) },
    readoutCorrected: true,
    brightIs: "up",
    estimator: "plug-in",
    interval: "percentile",
    traces: planDistanceTraces(chain),
    rule: DEFAULT_FRONT_RULE,
    options: DEFAULT_FRONT_FIT_OPTIONS,
    replicates: 60,
    seed: 5,
    ...changes,
  };
}

function planOf(changes: Partial<NullFrontInput> = {}): NullFrontPlan {
  const plan = planNullFront(inputOf(changes));
  if (isStudyRefusal(plan)) throw new Error(plan.message);
  return plan;
}

function repeatsOf(plan: NullFrontPlan, count: number): NullFrontRepeat[] {
  return Array.from({ length: count }, (_, repeat) => nullFrontRepeat(plan, repeat));
}

function observedPoint(distance: number, time_us: number | null): FrontPoint {
  return { label: `d = ${distance}`, distance, time_us, fitted: true, error_us: 1, low_us: null, high_us: null, status: "resolved", failedShare: 0, level: null, warnings: [] };
}

/** Kolmogorov's distance of values from the uniform law on (0, 1). */
function distanceFromUniform(values: number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  return Math.max(...sorted.map((value, m) => Math.max(Math.abs((m + 1) / sorted.length - value), Math.abs(value - m / sorted.length))));
}

describe.each([
  ["xy", 400],
  ["ising", 1500],
] as const)("the null front of the nearest-neighbour %s chain", (model, shots) => {
  const shotsPerTime = new Float64Array(times_us.length).fill(shots);
  const plan = planOf({ model, shotsPerTime });
  const repeats = repeatsOf(plan, 250);

  // Another seed gives other draws of the same model.
  const data = repeatsOf(planOf({ model, shotsPerTime, seed: 99 }), 250);
  const pValues = data.flatMap(({ gamma }) => judgeNullFront(plan, repeats, gamma).pValue ?? []);

  it("has uniform p-values for data that are themselves null", () => {
    expect(pValues.length).toBeGreaterThan(240);
    // 99.9 % point of the two-sample Kolmogorov–Smirnov statistic, 1.95 √(2/250).
    expect(distanceFromUniform(pValues)).toBeLessThan(1.95 * Math.sqrt(2 / 250) + 1 / 250);
  });

  it("is seldom called faster than itself", () => {
    // 2.5 % of 250 is 6.25 ± 2.5, and the threshold's own scatter doubles the variance: four deviations.
    expect(pValues.filter((p) => p <= 0.025).length).toBeLessThanOrEqual(6.25 + 4 * 3.5);
  });

  it("scatters about what the extractor reads without noise", () => {
    const { gamma, noiseFree } = judgeNullFront(plan, repeats, 1);
    expect(noiseFree.gamma).not.toBeNull();
    expect(gamma.low).toBeLessThan(noiseFree.gamma ?? NaN);
    expect(gamma.high).toBeGreaterThan(noiseFree.gamma ?? NaN);
  });

  it("gives each repeat the same result in any order", () => {
    expect(nullFrontRepeat(plan, 7)).toEqual(repeats[7]);
    expect(nullFrontRepeat(structuredClone(plan), 3)).toEqual(repeats[3]);
  });
});

describe("an accelerating front held against the null front", () => {
  /** τ ∝ d^½ with the null's own shots: the front of a long-range model, by construction. */
  const plan = planOf({ shotsPerTime: new Float64Array(times_us.length).fill(1500) });
  const mean = new Float64Array(SITES);
  const laws = Array.from(times_us, (time) => {
    const correlator = Float64Array.from({ length: (SITES * (SITES - 1)) / 2 });
    let pair = 0;
    for (let i = 0; i < SITES; i++) {
      for (let j = i + 1; j < SITES; j++) correlator[pair++] = 0.35 / (1 + Math.exp(-(time / (55 * Math.sqrt(j - i)) - 1.5) * 8)) / Math.sqrt(j - i);
    }
    return gaussianLawOf({ mean, correlator }).law;
  });

  it("is called faster than a nearest-neighbour cone", () => {
    const repeats = repeatsOf(plan, 60);
    const { front } = analyseSimulatedRun({ ...plan.run, laws, purpose: RANDOM_PURPOSES.simulation }, 0);
    const judged = judgeNullFront(plan, repeats, frontNumbers(front).gamma);
    expect(judged.observed.gamma).toBeLessThan(0.8);
    expect(judged.fasterThanNearestNeighbour).toBe(true);
    expect(judged.pValue).toBeCloseTo(1 / 61, 12);
    expect(judged.sentence).toMatch(/^Faster than a nearest-neighbour cone: γ = 0\.\d\d, and 0 of 60 simulated runs/);
  });
});

describe("the long-range XY quench, J_ij = J₀/|i − j|, held against the null front of the same largest coupling", () => {
  /** J₀t from 0.06 to 1.3. */
  const couplingTimes = Float64Array.from({ length: 20 }, (_, k) => 0.06 + 0.065 * k);
  const times = couplingTimes.map((time) => (time / (2 * Math.PI * 1000)) * 1e6);
  const plan = planOf({ times_us: times, shotsPerTime: new Float64Array(20).fill(1000) });
  const couplings = powerLawCouplings(SITES, 1, 1);
  const pairs = listPairs(SITES);
  const laws = Array.from(couplingTimes, (time) => {
    const chances = probabilities(evolve(xyHamiltonian(SITES, couplings), allDown(SITES), time));
    const correlator = Float64Array.from({ length: pairs.length / 2 }, (_, pair) => connectedSpins(chances, pairs[2 * pair], pairs[2 * pair + 1]));
    return gaussianLawOf({ mean: Float64Array.from({ length: SITES }, (_, i) => meanSpin(chances, i)), correlator }).law;
  });

  it("is called faster in every one of ten runs of 1000 shots", () => {
    const repeats = repeatsOf(plan, 120);
    for (let data = 0; data < 10; data++) {
      const { front } = analyseSimulatedRun({ ...plan.run, laws, purpose: RANDOM_PURPOSES.simulation }, data);
      const judged = judgeNullFront(plan, repeats, frontNumbers(front).gamma);
      expect(judged.fasterThanNearestNeighbour).toBe(true);
    }
  });
});

describe("a run so short that the nearest-neighbour chain is seen at two distances only", () => {
  const points = [1, 2, 3, 4, 5].map((distance) => observedPoint(distance, 20 * distance ** 0.3));
  /** J₀t to 0.45: 4Jt to 1.8. */
  const times = Float64Array.from({ length: 16 }, (_, k) => ((0.03 + 0.028 * k) / (2 * Math.PI * 1000)) * 1e6);
  const plan = planOf({ times_us: times, shotsPerTime: new Float64Array(16).fill(500), observedPoints: points });
  const repeats = repeatsOf(plan, 60);

  it("is compared by how far its front is seen", () => {
    const judged = judgeNullFront(plan, repeats, 0.3);
    expect(judged.statistic).toBe("reach");
    expect(judged.observed.reach).toBe(5);
    expect(judged.reach.high).toBeLessThan(4);
    expect(judged.fasterThanNearestNeighbour).toBe(true);
    expect(judged.sentence).toMatch(/^Faster than a nearest-neighbour cone: the front is seen out to distance 5, and within the same times 0 of 60/);
    expect(judged.warnings.some((warning) => warning.startsWith("Most simulated runs allow no fit"))).toBe(true);
  });

  it("is not called faster when its front is seen no farther than the model's", () => {
    const near = judgeNullFront({ ...plan, observedReach: 2 }, repeats, 0.3);
    expect(near.statistic).toBe("reach");
    expect(near.fasterThanNearestNeighbour).toBe(false);
  });
});

describe("the coupling of the null front", () => {
  it("is matched so that the model crosses where the nearest observed point does", () => {
    const known = planOf();
    const points = known.noiseFree.points.map(({ distance, time_us, fitted }) => ({ ...observedPoint(distance, time_us), fitted }));
    const { coupling } = planOf({ jMax_hz: null, observedPoints: points });
    expect(coupling).toMatchObject({ source: "matched", matchedDistance: 1 });
    expect(coupling.j_hz / 1000).toBeCloseTo(1, 2);
  });

  it("is refused without a coupling and without a point", () => {
    expect(planNullFront(inputOf({ jMax_hz: null }))).toMatchObject({ where: "jMax_hz" });
  });
});

describe("a null front", () => {
  it("works with reference traces and bright spins down, without readout errors", () => {
    const plan = planOf({ traces: planReferenceTraces(chain, 0), readoutErrors: null, brightIs: "down" });
    expect(plan.noiseFree.points).toHaveLength(SITES - 1);
    expect(nullFrontRepeat(plan, 0).points).toBeGreaterThanOrEqual(3);
  });

  it("is refused for planar arrays, and where readout cannot be corrected", () => {
    const plane = { x: chain.x, y: new Float64Array(SITES) };
    expect(planNullFront(inputOf({ positions: plane }))).toMatchObject({ where: "positions" });
    const blind = { falseBright: new Float64Array(SITES).fill(0.5), falseDark: new Float64Array(SITES).fill(0.45) };
    expect(planNullFront(inputOf({ readoutErrors: blind }))).toMatchObject({ where: "readoutErrors" });
  });

  it("gives no verdict without repeats or without an observed fit", () => {
    const plan = planOf();
    expect(judgeNullFront(plan, [], 0.5)).toMatchObject({ pValue: null, fasterThanNearestNeighbour: false, shareWithoutFit: null });
    const judged = judgeNullFront(plan, repeatsOf(plan, 3), null);
    expect(judged.pValue).toBeNull();
    expect(judged.sentence).toContain("no power-law fit");
    expect(judged.warnings[0]).toContain("39 are needed");
  });
});
