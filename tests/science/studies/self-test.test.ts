import { describe, expect, it } from "vitest";
import { planDistanceTraces, planReferenceTraces } from "@/lib/science/correlators/trace-plan";
import { analyseFront } from "@/lib/science/front/analyse-front";
import { DEFAULT_FRONT_FIT_OPTIONS, DEFAULT_FRONT_RULE } from "@/lib/science/front/front-rule";
import type { TraceSet } from "@/lib/science/front/trace-set";
import { judgeSelfTest } from "@/lib/science/studies/judge-self-test";
import { planSelfTest, selfTestRepeat, type SelfTestPlan } from "@/lib/science/studies/self-test";
import type { SelfTestInput } from "@/lib/science/studies/self-test-input";
import type { SelfTestRepeat } from "@/lib/science/studies/self-test-result";
import { wantedCorrelators } from "@/lib/science/studies/self-test-truth";
import { isStudyRefusal } from "@/lib/science/studies/study-refusal";
import { measureCone, type Cone } from "../front/simulated-cone";

const SITES = 8;
const SHOTS = 2000;
const TIMES = 30;
const chain = { x: Float64Array.from({ length: SITES }, (_, i) => i), y: null };

function coneOf(exponent: number, amplitude = 0.25): Cone {
  return {
    distances: [1, 2, 3, 4, 5, 6, 7],
    times_us: Array.from({ length: TIMES }, (_, k) => 20 + 25 * k),
    front_us: (distance) => 100 * distance ** exponent,
    rise_us: 250,
    amplitude,
    noise: 0.004,
  };
}

function inputOf(cone: Cone, changes: Partial<SelfTestInput> = {}): SelfTestInput {
  const observedTraces = measureCone(cone, 200, 3);
  return {
    positions: chain,
    means: new Float64Array(SITES * cone.times_us.length).fill(0.1),
    observedTraces,
    observedFront: analyseFront(observedTraces, DEFAULT_FRONT_RULE).front,
    times_us: Float64Array.from(cone.times_us),
    shotsPerTime: new Float64Array(cone.times_us.length).fill(SHOTS),
    readoutErrors: { falseBright: new Float64Array(SITES).fill(0.01), falseDark: new Float64Array(SITES).fill(0.02) },
    readoutCorrected: true,
    brightIs: "up",
    estimator: "plug-in",
    interval: "percentile",
    traces: planDistanceTraces(chain),
    rule: DEFAULT_FRONT_RULE,
    options: DEFAULT_FRONT_FIT_OPTIONS,
    replicates: 200,
    seed: 17,
    ...changes,
  };
}

function planOf(input: SelfTestInput): SelfTestPlan {
  const plan = planSelfTest(input);
  if (isStudyRefusal(plan)) throw new Error(plan.message);
  return plan;
}

function repeatsOf(plan: SelfTestPlan, count: number): SelfTestRepeat[] {
  return Array.from({ length: count }, (_, repeat) => selfTestRepeat(plan, repeat));
}

describe("the self-test of a well-behaved run", () => {
  const plan = planOf(inputOf(coneOf(0.8)));
  const repeats = repeatsOf(plan, 200);
  const result = judgeSelfTest(plan, repeats);

  it("has a truth that lies on the fitted power law", () => {
    expect(result.truth.fittedGamma).toBeCloseTo(0.8, 1);
    expect(Math.abs((result.gamma.truth ?? NaN) - result.truth.fittedGamma)).toBeLessThan(0.03);
    expect(result.truth.largestChange).toBeLessThan(0.05);
    for (const { distance, truth } of result.crossings) expect(Math.abs((truth ?? NaN) / (100 * distance ** 0.8) - 1)).toBeLessThan(0.06);
  });

  it("finds the 95 % intervals of γ, v and the crossing times between 90 and 99 %", () => {
    for (const { share } of [result.gamma.coverage, result.v_sites_per_ms.coverage, result.crossingCoverage]) {
      expect(share).toBeGreaterThanOrEqual(0.9);
      expect(share).toBeLessThanOrEqual(0.99);
    }
  });

  it("finds the reported error near the scatter, and little bias", () => {
    expect((result.gamma.meanError ?? NaN) / (result.gamma.scatter ?? NaN)).toBeGreaterThan(0.8);
    expect((result.gamma.meanError ?? NaN) / (result.gamma.scatter ?? NaN)).toBeLessThan(1.5);
    expect(Math.abs(result.gamma.biasInErrors ?? NaN)).toBeLessThan(0.5);
    expect(result.failedFits).toBe(0);
  });

  it("says so in one sentence", () => {
    expect(result.sentence).toMatch(
      /^In 200 simulated runs of this size the 95\u202f% interval of γ held the truth in 1\d\d \(\d\d–\d{2,3}\u202f%\); bias \u2212?0\.\d+ of error 0\.\d+\.$/,
    );
  });

  it("gives each repeat the same result in any order", () => {
    expect(selfTestRepeat(structuredClone(plan), 5)).toEqual(repeats[5]);
  });
});

describe("the truth of a self-test", () => {
  it("gives every pair the signal of its trace, also with reference traces and other pairs between them", () => {
    const input = inputOf(coneOf(1), { traces: planReferenceTraces(chain, 0) });
    const { swing: wanted } = wantedCorrelators(input, { a: 0.01, gamma: 1 });
    expect(wanted).toHaveLength(TIMES);
    // At 420 µs the front is at 4.2 sites: pairs at distance 6 and 7 show nothing yet, those at distance 1 are near theirs.
    expect(wanted[16][5]).toBe(0);
    expect(wanted[16][6]).toBe(0);
    expect(wanted[16][0]).toBeGreaterThan(0.1);
    // Sites 3 and 4 are a pair of no trace: their signal is that of distance 1.
    const pairOf34 = 7 + 6 + 5;
    expect(wanted[16][pairOf34]).toBeCloseTo(wanted[16][0], 12);
  });

  it("rises for good where the run's traces do, and keeps to the fitted front", () => {
    // A Gaussian in distance that widens in time reaches a tenth of its value everywhere at τ = 70 d, in the noise of a cone without signal.
    const noise = measureCone({ ...coneOf(1), amplitude: 0 }, 200, 4);
    const { times_us } = noise;
    const signal = (trace: number, k: number) => 0.6 * Math.exp(-Math.LN10 * ((70 * (1 + trace)) / times_us[k]) ** 2);
    const observedTraces: TraceSet = {
      ...noise,
      value: noise.value.map((value, at) => value + signal(Math.floor(at / TIMES), at % TIMES)),
      replicates: noise.replicates.map((value, at) => value + signal(Math.floor(at / 200) % 7, Math.floor(at / 1400))),
    };
    const { front: observedFront } = analyseFront(observedTraces, DEFAULT_FRONT_RULE);
    const { truth, front } = planOf(inputOf(coneOf(1), { observedTraces, observedFront }));
    expect(truth.largestChange).toBeLessThan(0.05);
    expect(Math.abs((front.gamma ?? NaN) - truth.fittedGamma)).toBeLessThan(0.03);
  });

  it("that no spins can have is moved, and the result says so", () => {
    const cone = coneOf(0.2, 0.9);
    const alternating = inputOf(cone);
    alternating.observedTraces.value.forEach((value, at) => {
      alternating.observedTraces.value[at] = -value;
    });
    const plan = planOf(alternating);
    const { truth, warnings } = judgeSelfTest(plan, repeatsOf(plan, 3));
    expect(truth.largestChange).toBeGreaterThan(0.1);
    expect(warnings.some((warning) => warning.startsWith("No spins with these means"))).toBe(true);
  });
});

describe("a self-test", () => {
  it("simulates the spins as read when the analysis does not correct its readout", () => {
    const errors = { falseBright: new Float64Array(SITES).fill(0.2), falseDark: new Float64Array(SITES).fill(0.2) };
    const plan = planOf(inputOf(coneOf(0.8), { readoutErrors: errors, readoutCorrected: false }));
    const withoutErrors = planOf(inputOf(coneOf(0.8), { readoutErrors: null, readoutCorrected: false }));
    expect(selfTestRepeat(plan, 0)).toEqual(selfTestRepeat(withoutErrors, 0));
  });


  it("is refused without a fitted power law", () => {
    const input = inputOf(coneOf(0.8));
    expect(planSelfTest({ ...input, observedFront: { ...input.observedFront, powerLaw: { reason: "too few points" } } })).toMatchObject({ where: "analysis" });
  });

  it("counts what gave no fit", () => {
    const input = inputOf(coneOf(0.8, 0.25), { shotsPerTime: new Float64Array(TIMES).fill(12) });
    const plan = planOf(input);
    const result = judgeSelfTest(plan, repeatsOf(plan, 20));
    expect(result.failedFits).toBeGreaterThan(10);
    expect(result.warnings.some((warning) => warning.includes("allowed no power-law fit"))).toBe(true);
  });

  it("says when nothing was simulated", () => {
    expect(judgeSelfTest(planOf(inputOf(coneOf(0.8))), []).sentence).toBe("No run was simulated.");
  });
});
