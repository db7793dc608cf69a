import { describe, expect, it } from "vitest";
import { analyseFront } from "@/lib/science/front/analyse-front";
import { DEFAULT_FRONT_RULE } from "@/lib/science/front/front-rule";
import { isStillRising } from "@/lib/science/front/window-evidence";
import { traceSetOf } from "./run-fixtures";
import { measureCone, type Cone } from "./simulated-cone";

const TIMES = Array.from({ length: 40 }, (_, k) => 5 * k);

function shape(value: (time_us: number) => number, error = 0.01) {
  const values = TIMES.map(value);
  return traceSetOf({ times_us: TIMES, distances: [1], value: [values], error: [values.map(() => error)] });
}

describe("a trace at the end of the window", () => {
  it("still rises when it grows to the last sample, of either sign", () => {
    expect(isStillRising(shape((t) => t / 200), 0, 39)).toBe(true);
    expect(isStillRising(shape((t) => -t / 200), 0, 39)).toBe(true);
  });

  it("does not when it has levelled off, has fallen, or rises less than its noise tells", () => {
    expect(isStillRising(shape((t) => 1 - Math.exp(-t / 20)), 0, 39)).toBe(false);
    expect(isStillRising(shape((t) => Math.exp(-(((t - 100) / 40) ** 2))), 0, 20)).toBe(false);
    expect(isStillRising(shape((t) => t / 200, 0.3), 0, 39)).toBe(false);
  });

  it("is not judged from fewer than eight times", () => {
    const traces = traceSetOf({ times_us: [1, 2, 3, 4], distances: [1], value: [[0, 0.1, 0.5, 1]] });
    expect(isStillRising(traces, 0, 3)).toBe(false);
  });
});

/** A straight cone at one site per 10 µs, each trace with its maximum 70 µs after the front reaches it. */
function straightCone(until_us: number): Cone {
  return {
    distances: Array.from({ length: 12 }, (_, n) => n + 1),
    times_us: Array.from({ length: 36 }, (_, k) => ((k + 1) * until_us) / 36),
    front_us: (distance) => 10 * distance,
    rise_us: 70,
    amplitude: 0.4,
    noise: 0.02,
  };
}

describe("a window that ends before the far traces reach their maximum", () => {
  const SEEDS = Array.from({ length: 60 }, (_, seed) => seed);
  const verdictsAt = (until_us: number) => SEEDS.map((seed) => analyseFront(measureCone(straightCone(until_us), 200, seed), DEFAULT_FRONT_RULE).front);

  // Read by the interval of γ alone the cut cone looks faster than linear in most of 60 cases, which it is not.
  it("makes a straight cone look bent, and nothing faster than linear is said of it", () => {
    const fronts = verdictsAt(135);
    const bent = fronts.filter(({ powerLaw }) => "gamma" in powerLaw && (powerLaw.gamma.high ?? 1) < 1);
    const claimed = fronts.filter(({ verdict }) => verdict === "faster than linear");
    expect(bent.length).toBeGreaterThan(30);
    expect(claimed.length).toBeLessThanOrEqual(4);
    expect(bent[0].verdictReasons.some((reason) => reason.includes("no longer rise"))).toBe(true);
  });

  it("is not complained of when it is long enough", () => {
    const fronts = verdictsAt(260);
    expect(fronts.filter(({ verdict }) => verdict === "faster than linear").length).toBeLessThanOrEqual(4);
    expect(fronts.flatMap(({ verdictReasons }) => verdictReasons).filter((reason) => reason.includes("no longer rise"))).toEqual([]);
  });

  it("does not hide a front that accelerates by what lies inside it", () => {
    const cone = { ...straightCone(260), front_us: (distance: number) => 40 * Math.sqrt(distance) };
    const fronts = SEEDS.slice(0, 20).map((seed) => analyseFront(measureCone(cone, 200, seed), DEFAULT_FRONT_RULE).front);
    expect(fronts.filter(({ verdict }) => verdict === "faster than linear").length).toBeGreaterThanOrEqual(19);
  });
});
