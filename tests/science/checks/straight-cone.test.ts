import { describe, expect, it } from "vitest";
import { crossingsOf } from "@/lib/science/front/analyse-front";
import { DEFAULT_FRONT_RULE, type CrossingMethod } from "@/lib/science/front/front-rule";
import { fitLinearFront } from "@/lib/science/front/linear-fit";
import { fitPowerLaw } from "@/lib/science/front/power-law-fit";
import { besselSeries } from "@/lib/science/theory/bessel";
import { traceSetOf } from "@/tests/science/front/run-fixtures";
import { publishedChecks } from "./published-checks";

// Numeric checks, section 7: |J_n(x)|² of the nearest-neighbour chain, and 10 % of its maximum, n = 1 … 40.
const { besselCrossings, besselFits } = publishedChecks();
const STEP = 5e-3;
const distances = besselCrossings.map((_, n) => n + 1);
const x = Array.from({ length: Math.round(46 / STEP) + 1 }, (_, k) => k * STEP);
const samples = x.map(besselSeries);
const traces = traceSetOf({
  times_us: x,
  distances,
  value: distances.map((n) => samples.map((series) => (series[n] ?? 0) ** 2)),
  error: distances.map(() => x.map(() => 0)),
});

function crossingTimes(method: CrossingMethod): Float64Array {
  return Float64Array.from(crossingsOf(traces, { ...DEFAULT_FRONT_RULE, method }), ({ time_us }) => time_us);
}

describe.each(["isotonic", "first", "last-upcrossing"] as const)("the exactly straight cone read by %s", (method) => {
  const times = crossingTimes(method);

  it("crosses at the tabulated times at all forty distances", () => {
    besselCrossings.forEach((time, n) => expect(Math.abs(times[n] - time)).toBeLessThan(2e-5));
  });

  it.each(besselFits)("has the tabulated velocities and exponent over distances $from to $to", ({ from, to, freeVelocity, originVelocity, gamma }) => {
    const distance = Float64Array.from(distances.slice(from - 1, to));
    const time = times.slice(from - 1, to);
    const even = time.map(() => 1);
    expect(1 / fitLinearFront(distance, time, even, false).slope).toBeCloseTo(freeVelocity, 4);
    expect(1 / fitLinearFront(distance, time, even, true).slope).toBeCloseTo(originVelocity, 4);
    expect(fitPowerLaw(distance, time, time).slope).toBeCloseTo(gamma, 4);
  });
});
