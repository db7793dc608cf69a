import { describe, expect, test } from "vitest";
import { analyseFront } from "@/lib/science/front/analyse-front";
import { isNoFit, type FrontResult, type LinearFront, type PowerLawFront } from "@/lib/science/front/front-result";
import { DEFAULT_FRONT_RULE } from "@/lib/science/front/front-rule";
import type { TraceSet } from "@/lib/science/front/trace-set";
import { expectedRun, traceSetOf, traceSetOfRun } from "./run-fixtures";
import { measureCone, type Cone } from "./simulated-cone";

const LOG_TIME = { throughOrigin: false, powerLawIn: "log-time", covariance: "diagonal" } as const;

const straightCone: Cone = {
  distances: [1, 2, 3, 4, 5, 6, 7, 8, 9, 10],
  times_us: Array.from({ length: 40 }, (_, k) => 4 * k + 2),
  front_us: (distance) => 10 * distance,
  rise_us: 60,
  amplitude: 0.5,
  noise: 0.015,
};
const openingCone: Cone = { ...straightCone, front_us: (distance) => 10 * distance ** 0.6 };
const closingCone: Cone = { ...straightCone, front_us: (distance) => 5 * distance ** 1.4, rise_us: 30, noise: 0.01 };

function bothFits(front: FrontResult): { linear: LinearFront; powerLaw: PowerLawFront } {
  const { linear, powerLaw } = front;
  if (isNoFit(linear) || isNoFit(powerLaw)) throw new Error("expected both fits");
  return { linear, powerLaw };
}

describe("a straight cone of 10 µs a site", () => {
  const { front, tauReplicates } = analyseFront(measureCone(straightCone, 400, 1), DEFAULT_FRONT_RULE);
  const { linear, powerLaw } = bothFits(front);

  test("is not distinguishable from linear", () => {
    expect(front.verdict).toBe("not distinguishable from linear");
    expect(front.verdictSentence).toMatch(
      /^Not distinguishable from linear: β = \d\.\d\d\(\d\), 95\u202f% interval 0\.\d\d to 1\.\d\d\.$/,
    );
  });

  test("gives 100 sites per ms, no offset and γ = 1 inside the intervals", () => {
    for (const [parameter, truth] of [
      [linear.v_sites_per_ms, 100],
      [linear.t0_us, 0],
      [powerLaw.gamma, 1],
      [powerLaw.beta, 1],
    ] as const) {
      expect(parameter.low).toBeLessThan(truth);
      expect(parameter.high).toBeGreaterThan(truth);
      expect(Math.abs((parameter.value ?? NaN) - truth)).toBeLessThan(3 * (parameter.error ?? NaN));
    }
  });

  test("keeps the replicates' crossings apart from the JSON", () => {
    expect(tauReplicates.length).toBe(10 * 400);
    expect(JSON.stringify(front)).not.toContain("tauReplicates");
  });

  test("survives JSON unchanged", () => {
    expect(JSON.parse(JSON.stringify(front))).toEqual(front);
  });

  test("has β as the reciprocal of γ, with ends exchanged", () => {
    expect(powerLaw.beta.value).toBeCloseTo(1 / (powerLaw.gamma.value ?? NaN), 12);
    expect(powerLaw.beta.low).toBeCloseTo(1 / (powerLaw.gamma.high ?? NaN), 12);
    expect(powerLaw.beta.high).toBeCloseTo(1 / (powerLaw.gamma.low ?? NaN), 12);
    expect(powerLaw.beta.unbounded).toBe(false);
  });

  test("has a power-law velocity aβτ^{β−1} at every point, and slopes between neighbours", () => {
    const [a, beta] = [powerLaw.a.value ?? NaN, powerLaw.beta.value ?? NaN];
    expect(front.velocity.powerLaw.length).toBe(linear.n);
    for (const { time_us, value_sites_per_ms, low_sites_per_ms, high_sites_per_ms } of front.velocity.powerLaw) {
      expect(value_sites_per_ms).toBeCloseTo(1000 * a * beta * time_us ** (beta - 1), 8);
      expect(low_sites_per_ms).toBeLessThan(value_sites_per_ms ?? NaN);
      expect(high_sites_per_ms).toBeGreaterThan(value_sites_per_ms ?? NaN);
    }
    const [first, second] = front.points.filter((point) => point.fitted);
    const between = front.velocity.betweenPoints[0];
    expect(between.value_sites_per_ms).toBeCloseTo(1000 / ((second.time_us ?? NaN) - (first.time_us ?? NaN)), 8);
  });

  test("draws both fits from the nearest to the farthest point, inside their bands", () => {
    const { linear: line, powerLaw: curve } = front.curves;
    for (const drawn of [line, curve]) {
      expect([drawn?.distance[0], drawn?.distance.at(-1)]).toEqual([1, 10]);
      drawn?.time_us.forEach((time, sample) => {
        expect(drawn.low_us[sample]).toBeLessThan(time ?? NaN);
        expect(drawn.high_us[sample]).toBeGreaterThan(time ?? NaN);
      });
    }
  });

  test("compares by the criteria of its two fits", () => {
    expect(front.comparison.deltaAicc).toBeCloseTo((powerLaw.aicc ?? NaN) - (linear.aicc ?? NaN), 12);
    expect(front.comparison.deltaBic).toBeCloseTo(powerLaw.bic - linear.bic, 12);
  });

  test("gives the same numbers again from the same replicates", () => {
    expect(analyseFront(measureCone(straightCone, 400, 1), DEFAULT_FRONT_RULE).front).toEqual(front);
  });
});

describe("the 95 % interval of γ over 150 simulated experiments of 200 replicates", () => {
  const experiments = 150;
  const monteCarlo = Math.sqrt((0.95 * 0.05) / experiments);

  test.each([
    ["a straight cone", straightCone, 1],
    ["an opening cone", openingCone, 0.6],
  ])("holds the truth for %s as often as it says, and its error is the real spread", (_, cone, truth) => {
    const gammas = Array.from(
      { length: experiments },
      (__, seed) => bothFits(analyseFront(measureCone(cone, 200, seed), DEFAULT_FRONT_RULE).front).powerLaw.gamma,
    );
    const covering =
      gammas.filter(({ low, high }) => (low ?? NaN) <= truth && truth <= (high ?? NaN)).length / experiments;
    expect(covering).toBeGreaterThan(0.95 - 3 * monteCarlo);
    const values = gammas.map(({ value }) => value ?? NaN);
    const mean = values.reduce((sum, value) => sum + value / experiments, 0);
    const spread = Math.sqrt(values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (experiments - 1));
    const error = gammas.reduce((sum, gamma) => sum + (gamma.error ?? NaN) / experiments, 0);
    // A replicate adds its own noise to the measured one, so the bootstrap error lies somewhat above the spread.
    expect(error / spread).toBeGreaterThan(0.85);
    expect(error / spread).toBeLessThan(1.4);
  });
});

describe("the verdict", () => {
  test("is faster than linear for d ∝ τ^1.67, and the power law fits better", () => {
    const { front } = analyseFront(measureCone(openingCone, 300, 2), DEFAULT_FRONT_RULE);
    expect(front.verdict).toBe("faster than linear");
    expect(front.comparison.deltaAicc).toBeLessThan(0);
  });

  test("is slower than linear for d ∝ τ^0.71", () => {
    const { front } = analyseFront(measureCone(closingCone, 300, 3), DEFAULT_FRONT_RULE);
    expect(front.verdict).toBe("slower than linear");
  });

  test("always says that β > 1 alone proves nothing, and points to the null front", () => {
    for (const cone of [straightCone, openingCone]) {
      const reasons = analyseFront(measureCone(cone, 50, 4), DEFAULT_FRONT_RULE).front.verdictReasons.join(" ");
      expect(reasons).toContain("β > 1 alone is no proof of anything faster than a nearest-neighbour cone");
      expect(reasons).toContain("the null front, is a study of its own");
    }
  });

  test("has no upper end of β when the front may be vertical", () => {
    const vertical: Cone = { ...straightCone, front_us: () => 40, noise: 0.03 };
    const { front } = analyseFront(measureCone(vertical, 300, 5), DEFAULT_FRONT_RULE);
    const { powerLaw } = bothFits(front);
    expect(powerLaw.gamma.low).toBeLessThan(0);
    expect([powerLaw.beta.high, powerLaw.beta.unbounded, powerLaw.a.high]).toEqual([null, true, null]);
    expect(front.verdict).toBe("faster than linear");
  });
});

describe("fit options", () => {
  const traces = measureCone(straightCone, 200, 6);

  test("through the origin the line has one parameter and no offset", () => {
    const { linear } = bothFits(analyseFront(traces, DEFAULT_FRONT_RULE, { ...LOG_TIME, throughOrigin: true }).front);
    expect(linear.dof).toBe(linear.n - 1);
    expect(linear.t0_us).toEqual({ value: 0, error: null, low: null, high: null, fitError: null });
    expect(Math.abs((linear.v_sites_per_ms.value ?? NaN) - 100)).toBeLessThan(3 * (linear.v_sites_per_ms.error ?? NaN));
  });

  test("the power law in τ itself is another fit, within its error of that in ln τ, and converges in every replicate", () => {
    const inTime = bothFits(
      analyseFront(traces, DEFAULT_FRONT_RULE, { ...LOG_TIME, powerLawIn: "time" }).front,
    ).powerLaw;
    const inLogTime = bothFits(analyseFront(traces, DEFAULT_FRONT_RULE, LOG_TIME).front).powerLaw;
    expect(inTime.fittedIn).toBe("time");
    expect(inTime.gamma.value).not.toBe(inLogTime.gamma.value);
    expect(Math.abs((inTime.gamma.value ?? NaN) - (inLogTime.gamma.value ?? NaN))).toBeLessThan(
      2 * (inTime.gamma.error ?? NaN),
    );
    expect(inTime.replicatesFitted).toBe(200);
  });
});

describe("points that cannot be fitted", () => {
  test("are listed with the reason, and fewer than three points give no fit", () => {
    const rise = [0, 0.05, 0.3, 1, 0.5];
    const value = [rise, [0.5, 0.6, 0.8, 1, 0.5], rise.map(() => 0), rise];
    const wobble = (b: number) =>
      value.map((samples) => samples.map((sample, k) => sample * (1 + 0.02 * Math.sin(7 * b + k))));
    const replicates = Array.from({ length: 40 }, (_, b) => wobble(b));
    const { front } = analyseFront(
      traceSetOf({ times_us: [1, 2, 3, 4, 5], distances: [1, 2, 3, 4], value, replicates }),
      DEFAULT_FRONT_RULE,
    );
    expect(front.points.map(({ status }) => status)).toEqual(["resolved", "at-start", "unresolved", "resolved"]);
    expect(front.points.map(({ fitted }) => fitted)).toEqual([true, false, false, true]);
    expect(front.points[1].time_us).toBe(1);
    expect(front.points[2].time_us).toBeNull();
    expect(front.unresolved.map(({ label, status }) => [label, status])).toEqual([
      ["site 2", "at-start"],
      ["site 3", "unresolved"],
    ]);
    const reason = "A fit needs at least 3 resolved points with an error bar; there are 2.";
    expect([front.linear, front.powerLaw]).toEqual([{ reason }, { reason }]);
    expect([front.verdict, front.comparison.deltaBic, front.curves.linear]).toEqual(["no fit", null, null]);
    expect(front.verdictSentence).toBe(
      "No fit: a fit needs at least 3 resolved points with an error bar; there are 2.",
    );
  });

  test("include every point of a trace set without replicates, whose crossings are still given", () => {
    const { front } = analyseFront(traceSetOfRun(expectedRun("xy-chain-12")), DEFAULT_FRONT_RULE);
    expect(front.points.map(({ time_us }) => time_us)).toEqual(
      expectedRun("xy-chain-12").statistical.crossing_us.map((time) => expect.closeTo(time ?? NaN, 8)),
    );
    expect(front.points.every(({ error_us, failedShare }) => error_us === null && failedShare === null)).toBe(true);
    expect(front.verdict).toBe("no fit");
  });

  test("at one distance only give no fit", () => {
    const traces: TraceSet = { ...measureCone(straightCone, 100, 7), distances: new Float64Array(10).fill(2) };
    expect(analyseFront(traces, DEFAULT_FRONT_RULE).front.linear).toEqual({
      reason: "All resolved points lie at the same distance.",
    });
  });

  test("of the same distance are averaged for the slopes between points", () => {
    const traces: TraceSet = {
      ...measureCone(straightCone, 100, 8),
      distances: Float64Array.of(1, 1, 2, 2, 3, 3, 4, 4, 5, 5),
    };
    const between = analyseFront(traces, DEFAULT_FRONT_RULE).front.velocity.betweenPoints;
    expect(between.map(({ fromDistance, toDistance }) => [fromDistance, toDistance])).toEqual([
      [1, 2],
      [2, 3],
      [3, 4],
      [4, 5],
    ]);
    expect(between.every(({ error_sites_per_ms }) => (error_sites_per_ms ?? 0) > 0)).toBe(true);
  });
});

test("warnings name how many traces they concern", () => {
  const short: Cone = { ...straightCone, times_us: straightCone.times_us.slice(0, 30) };
  const { front } = analyseFront(measureCone(short, 100, 9), DEFAULT_FRONT_RULE);
  const atEdge = front.points.filter(({ warnings }) => warnings.includes("maximum-at-window-edge")).length;
  expect(atEdge).toBeGreaterThan(0);
  expect(front.warnings[0]).toMatch(
    new RegExp(`^${atEdge} of 10 traces (has|have) the largest signal at the edge of the window`),
  );
});
