import { describe, expect, it } from "vitest";
import { analyseTime } from "@/lib/science/correlators/analyse-time";
import { collectTraces } from "@/lib/science/correlators/collect-traces";
import { packSpins } from "@/lib/science/correlators/packed-spins";
import { planDistanceTraces, planReferenceTraces, type TracePlan } from "@/lib/science/correlators/trace-plan";
import { analyseFront } from "@/lib/science/front/analyse-front";
import { isNoFit, type FrontResult } from "@/lib/science/front/front-result";
import { median } from "@/lib/science/stats/quantiles";
import { sweepFront } from "@/lib/science/studies/sweep";
import { combinationLabel } from "@/lib/science/studies/sweep-labels";
import type { SweepResult } from "@/lib/science/studies/sweep-result";
import { countedRun, sweepInputOf, sweptTimes, type CountedRun } from "./sweep-run";

const REPLICATES = 300;
const run = countedRun(10, 24, 1500, 10, 3);
const input = sweepInputOf(run);
const times = sweptTimes(run, input);
const result = sweepFront(input, times);

function bootstrapFront({ counts, shots, positions, thresholds, times_us }: CountedRun, plan: TracePlan): FrontResult {
  const sites = positions.x.length;
  const results = counts.map((ofTime, timeIndex) =>
    analyseTime({ timeIndex, spins: packSpins(ofTime, shots, sites, thresholds, "up"), estimator: "plug-in", readout: null, plan, replicates: REPLICATES, seed: 1, interval: "percentile", blockLength: 1, pairErrors: "law" }),
  );
  return analyseFront(collectTraces(plan, times_us, results, REPLICATES), input.rule, input.options).front;
}

function found({ combinations, baseline }: SweepResult, label: string) {
  const combination = combinations.find(({ choices }) => combinationLabel(choices, baseline.choices) === label);
  if (combination === undefined) throw new Error(`the sweep has no combination “${label}”`);
  return combination;
}

describe("the sweep's own baseline", () => {
  const front = bootstrapFront(run, planReferenceTraces(run.positions, 0));

  it("fits as many points as the analysis with a bootstrap, and gives a γ that other weights alone keep within two errors of it", () => {
    if (isNoFit(front.powerLaw)) throw new Error(front.powerLaw.reason);
    expect(result.baseline.points).toBe(front.points.filter(({ fitted }) => fitted).length);
    const difference = Math.abs((result.baseline.gamma?.value ?? NaN) - (front.powerLaw.gamma.value ?? NaN));
    expect(difference).toBeLessThan(2 * (front.powerLaw.gamma.error ?? 0));
  });

  it("has an error of γ of the bootstrap's size", () => {
    if (isNoFit(front.powerLaw)) throw new Error(front.powerLaw.reason);
    const ratio = (result.baseline.gamma?.error ?? NaN) / (front.powerLaw.gamma.error ?? NaN);
    expect(ratio).toBeGreaterThan(0.4);
    expect(ratio).toBeLessThan(1.5);
  });
});

describe("a sweep", () => {
  it("gives the same result whichever order the times come back in", () => {
    expect(sweepFront(input, Array.from(times).reverse())).toEqual(result);
  });

  it("refuses to go on without one of the times", () => {
    expect(() => sweepFront(input, times.slice(1))).toThrow(RangeError);
  });

  it("can be kept as JSON without a loss", () => {
    expect(JSON.parse(JSON.stringify(result))).toEqual(result);
  });

  it("finds by distance what an analysis by distance finds as its own", () => {
    const byDistance = sweepFront(sweepInputOf(run, { traces: { kind: "distance" } }), times);
    expect(found(result, "by distance")).toEqual(byDistance.baseline);
    expect(found(byDistance, "reference site 0")).toEqual(result.baseline);
  });

  it("finds at another threshold what an analysis with that threshold finds as its own", () => {
    const shifted = { ...run, thresholds: run.thresholds.map((threshold) => threshold + 1) };
    const { gamma, beta, v_sites_per_ms, points } = sweepFront(input, sweptTimes(shifted, input)).baseline;
    expect(found(result, "θ + 1")).toMatchObject({ gamma, beta, v_sites_per_ms, points });
  });

  it("finds without the first times what a run that begins later shows", () => {
    const later = { ...run, times_us: run.times_us.slice(2), counts: run.counts.slice(2) };
    const laterInput = sweepInputOf(later);
    const { gamma, points } = sweepFront(laterInput, sweptTimes(later, laterInput)).baseline;
    expect(found(result, "without the first 2 times")).toMatchObject({ gamma, points });
  });

  it("is moved by no readout correction that is the same at all sites: level and signal grow alike", () => {
    expect(found(result, "corrected").gamma?.value).toBeCloseTo(result.baseline.gamma?.value ?? NaN, 10);
    expect(found(result, "by distance, corrected").gamma?.error).toBeCloseTo(found(result, "by distance").gamma?.error ?? NaN, 10);
  });

  it("corrects nowhere without error rates", () => {
    const blind = sweepFront(sweepInputOf(run, { readoutErrors: [null, null, null] }), times);
    expect(blind.combinations.some(({ choices }) => choices.readoutCorrection)).toBe(false);
    expect(blind.choices.map(({ name }) => name)).not.toContain("correction");
  });

  it("says of every choice how far it alone moves γ, in the analysis' own errors, most first", () => {
    const shifts = result.choices.map(({ shift }) => shift ?? NaN);
    expect(shifts).toEqual(Array.from(shifts).sort((one, other) => other - one));
    const level = result.choices.find(({ name }) => name === "level");
    const moves = ["level 0.05", "level 0.15", "level 0.2", "level 0.3"].map((label) => Math.abs((found(result, label).gamma?.value ?? NaN) - (result.baseline.gamma?.value ?? NaN)));
    expect(level?.shift).toBeCloseTo(Math.max(...moves) / 0.028, 12);
  });

  it("names the reason where a combination allows no fit", () => {
    const strict = sweepFront(sweepInputOf(run, { rule: { ...input.rule, minSignal: 1000 } }), times);
    expect(strict.withoutFit).toBe(strict.combinations.length);
    expect(strict.baseline.reason).toMatch(/at least 3 resolved points/);
    expect(strict.sentence).toMatch(/allow no power law/);
  });
});

describe("the closed-form error of a crossing time", () => {
  it("is of the bootstrap's size for distance averages of many shots, where the pooling hardly changes", () => {
    const many = countedRun(8, 16, 6000, 8, 7);
    const plan = planDistanceTraces(many.positions);
    const front = bootstrapFront(many, plan);
    const sweep = sweepFront(sweepInputOf(many, { traces: { kind: "distance" } }), sweptTimes(many, sweepInputOf(many)));
    if (isNoFit(front.linear)) throw new Error(front.linear.reason);
    const errors = [front.linear.v_sites_per_ms.error ?? NaN, sweep.baseline.v_sites_per_ms?.error ?? NaN];
    expect(errors[1] / errors[0]).toBeGreaterThan(0.5);
    expect(errors[1] / errors[0]).toBeLessThan(1.5);
    expect(median(sweep.combinations.flatMap(({ beta }) => (beta === null ? [] : [beta.error])))).toBeGreaterThan(0);
  });
});
