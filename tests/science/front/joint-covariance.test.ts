import { describe, expect, it } from "vitest";
import { analyseFront } from "@/lib/science/front/analyse-front";
import { crossingCovariance } from "@/lib/science/front/crossing-covariance";
import { powerLawFitter } from "@/lib/science/front/front-fitters";
import type { FrontPoints } from "@/lib/science/front/front-points";
import { isNoFit, type FrontResult } from "@/lib/science/front/front-result";
import { DEFAULT_FRONT_FIT_OPTIONS, DEFAULT_FRONT_RULE } from "@/lib/science/front/front-rule";
import { influenceOf } from "@/lib/science/front/influence";
import { createRandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { drawNormal } from "@/lib/science/stats/random-variates";
import { measureCone, type Cone } from "./simulated-cone";

const GLS = { ...DEFAULT_FRONT_FIT_OPTIONS, covariance: "bootstrap" } as const;
const CONE: Cone = {
  distances: [1, 2, 3, 4, 5, 6],
  times_us: Array.from({ length: 40 }, (_, k) => 5 * (k + 1)),
  front_us: (distance) => 12 * distance,
  rise_us: 60,
  amplitude: 0.4,
  noise: 0.015,
};

function powerLawOf({ powerLaw }: FrontResult) {
  if (isNoFit(powerLaw)) throw new Error(powerLaw.reason);
  return powerLaw;
}

describe("the joint covariance of crossing times", () => {
  it("is that of the replicates in which all of them cross", () => {
    const tau = Float64Array.of(1, 2, 3, Number.NaN, 2, 4, 6, 1, ...new Array<number>(4).fill(0));
    const many = Float64Array.from({ length: 2 * 40 }, (_, at) => (at < 40 ? at : 2 * (at - 40)));
    const covariance = crossingCovariance(Int32Array.of(0, 1), many, 40);
    if ("reason" in covariance) throw new Error(covariance.reason);
    const variance = (40 * 41) / 12;
    expect([...covariance].map((value) => Number((value / variance).toFixed(12)))).toEqual([1, 2, 2, 4]);
    const few = crossingCovariance(Int32Array.of(0, 1), tau, 4);
    expect("reason" in few && few.reason).toContain("20 replicates in which all of them cross; there are 3");
  });

  it("refuses a fit with a reason when the replicates are too few for the points", () => {
    const { front } = analyseFront(measureCone(CONE, 50, 1), DEFAULT_FRONT_RULE, GLS);
    expect(isNoFit(front.powerLaw) && front.powerLaw.reason).toContain("needs 60 replicates");
  });
});

describe("generalised least squares of a front", () => {
  it("agrees with independent weights where crossing times are independent", () => {
    const traces = measureCone(CONE, 2000, 3);
    const plain = powerLawOf(analyseFront(traces, DEFAULT_FRONT_RULE).front);
    const joint = powerLawOf(analyseFront(traces, DEFAULT_FRONT_RULE, GLS).front);
    expect(Math.abs((joint.gamma.value ?? NaN) - (plain.gamma.value ?? NaN))).toBeLessThan(0.2 * (plain.gamma.error ?? NaN));
    expect(joint.chi2 / plain.chi2).toBeGreaterThan(0.7);
    expect(joint.chi2 / plain.chi2).toBeLessThan(1.4);
  });

  it("has the smaller scatter where crossing times fluctuate together", () => {
    const truth = [10, 20, 30, 40, 50];
    const stream = createRandomStream(4, RANDOM_PURPOSES.simulation, 9);
    const covariance = Float64Array.from({ length: 25 }, (_, at) => (at % 6 === 0 ? 1 : 0.9));
    const points: FrontPoints = {
      trace: Int32Array.of(0, 1, 2, 3, 4),
      distance: Float64Array.of(1, 2, 3, 4, 5),
      time_us: Float64Array.from(truth),
      error_us: new Float64Array(5).fill(1),
      softened_us: new Float64Array(5).fill(1.01),
      covariance,
    };
    const places = Int32Array.of(0, 1, 2, 3, 4);
    const slopesOf = (fitter: ReturnType<typeof powerLawFitter>, times: Float64Array[]) =>
      times.map((time_us) => fitter(points.distance, time_us, points.softened_us, places).slope);
    const times = Array.from({ length: 400 }, () => {
      const shared = Math.sqrt(0.9) * drawNormal(stream);
      return Float64Array.from(truth, (time) => time + shared + Math.sqrt(0.1) * drawNormal(stream));
    });
    const scatter = (slopes: number[]) => Math.sqrt(slopes.reduce((sum, slope) => sum + (slope - 1) ** 2, 0) / slopes.length);
    const joint = slopesOf(powerLawFitter(points, "log-time"), times);
    const alone = slopesOf(powerLawFitter({ ...points, covariance: null }, "log-time"), times);
    expect(scatter(joint)).toBeLessThan(scatter(alone));
    const inTime = slopesOf(powerLawFitter(points, "time"), times);
    expect(scatter(inTime)).toBeLessThan(scatter(alone));
  });

  // The published power law by generalised least squares in τ itself: checks, section 10.
  it("in τ itself gives the published exponent and amplitude", () => {
    const time_us = Float64Array.of(1.1, 1.9, 3.2, 3.9);
    const points: FrontPoints = {
      trace: Int32Array.of(0, 1, 2, 3),
      distance: Float64Array.of(1, 2, 3, 4),
      time_us,
      error_us: new Float64Array(4).fill(0.2),
      softened_us: new Float64Array(4).fill(0.2),
      covariance: Float64Array.from({ length: 16 }, (_, at) => 0.04 * 0.5 ** Math.abs(Math.floor(at / 4) - (at % 4))),
    };
    const fit = powerLawFitter(points, "time")(points.distance, time_us, points.softened_us, Int32Array.of(0, 1, 2, 3));
    expect(fit.slope).toBeCloseTo(0.92986913, 8);
    expect(Math.exp(fit.offset)).toBeCloseTo(1.08182118, 8);
    expect(fit.slopeError).toBeCloseTo(0.11720411, 8);
  });
});

describe("the influence of a point", () => {
  it("is what the fit without it gives", () => {
    const traces = measureCone(CONE, 400, 5);
    const { front } = analyseFront(traces, DEFAULT_FRONT_RULE);
    expect(front.influence.map(({ distance }) => distance)).toEqual(CONE.distances);
    const moved = front.influence.map(({ gammaShiftInErrors }) => Math.abs(gammaShiftInErrors ?? NaN));
    expect(Math.max(...moved)).toBeLessThan(4);
    const strongest = front.influence[moved.indexOf(Math.max(...moved))];
    const gamma = powerLawOf(front).gamma;
    expect((strongest.gamma ?? NaN) - (gamma.value ?? NaN)).toBeCloseTo((strongest.gammaShiftInErrors ?? NaN) * (gamma.error ?? NaN), 12);
    expect(strongest.beta).toBeCloseTo(1 / (strongest.gamma ?? NaN), 12);
    expect(front.failedFitShare).toBe(0);
  });

  it("is left out when too few points would remain", () => {
    const points: FrontPoints = {
      trace: Int32Array.of(0, 1, 2),
      distance: Float64Array.of(1, 2, 3),
      time_us: Float64Array.of(1, 2, 3),
      error_us: Float64Array.of(1, 1, 1),
      softened_us: Float64Array.of(1, 1, 1),
      covariance: null,
    };
    expect(influenceOf(points, ["a", "b", "c"], DEFAULT_FRONT_FIT_OPTIONS, { value: 1, error: 0.1 })).toEqual([]);
  });
});
