import { describe, expect, test } from "vitest";
import { crossingsOf } from "@/lib/science/front/analyse-front";
import { DEFAULT_FRONT_RULE, type FrontRule } from "@/lib/science/front/front-rule";
import { expectedRun, RUN_NAMES, traceSetOf, traceSetOfRun } from "./run-fixtures";

function crossingOf(value: number[], rule: Partial<FrontRule> = {}, error?: number[]) {
  const times_us = value.map((_, k) => 10 * (k + 1));
  const traces = traceSetOf({ times_us, distances: [1], value: [value], error: error && [error] });
  return crossingsOf(traces, { ...DEFAULT_FRONT_RULE, ...rule })[0];
}

describe.each(RUN_NAMES)("crossings of the simulated run %s, found independently with NumPy", (name) => {
  const expected = expectedRun(name);
  const traces = traceSetOfRun(expected);

  test.each(["isotonic", "first"] as const)("method %s agrees to 1e-9 for every trace", (method) => {
    const crossings = crossingsOf(traces, { ...DEFAULT_FRONT_RULE, method });
    const times =
      method === "isotonic" ? expected.deterministic.crossing_isotonic_us : expected.deterministic.crossing_first_us;
    expect(crossings.length).toBe(times.length);
    crossings.forEach((crossing, j) => {
      const time = times[j];
      if (time === null) expect(crossing.time_us).toBeNaN();
      else expect(Math.abs(crossing.time_us / time - 1)).toBeLessThan(1e-9);
    });
  });

  test("every trace has the expected status", () => {
    expect(crossingsOf(traces, DEFAULT_FRONT_RULE).map((crossing) => crossing.status)).toEqual(
      expected.statistical.status,
    );
  });
});

describe("method first", () => {
  test("interpolates between the last sample below and the first at the level", () => {
    const crossing = crossingOf([0, 0.05, 0.25, 1], { method: "first" });
    expect(crossing.status).toBe("resolved");
    expect(crossing.time_us).toBeCloseTo(22.5, 12);
  });

  test("a single sample above the level is passed over with hold 2, and taken with hold 1", () => {
    const value = [0, 0.2, 0, 0.3, 1];
    expect(crossingOf(value, { method: "first", hold: 1 }).time_us).toBeCloseTo(15, 12);
    expect(crossingOf(value, { method: "first", hold: 2 }).time_us).toBeCloseTo(30 + 10 / 3, 12);
  });

  test("the last sample needs no follower", () => {
    expect(crossingOf([0, 0, 0, 1], { method: "first", hold: 2 }).time_us).toBeCloseTo(31, 12);
    expect(crossingOf([0, 0, 0, 1], { method: "first", hold: 3 }).time_us).toBeCloseTo(31, 12);
  });

  test("a signal that never holds the level does not cross", () => {
    const crossing = crossingOf([0, 1, 0, 0], { method: "first", hold: 2 });
    expect(crossing.status).toBe("no-crossing");
    expect(crossing.time_us).toBeNaN();
  });

  test("a first sample at the level is at-start, at the first time", () => {
    const crossing = crossingOf([0.2, 0.4, 1], { method: "first" });
    expect(crossing.status).toBe("at-start");
    expect(crossing.time_us).toBe(10);
  });
});

describe("method isotonic", () => {
  test("pools samples that do not increase, at the mean time weighted by the kept shots", () => {
    const times_us = [0, 10, 20, 40];
    const shotsPerTime = [100, 100, 300, 100];
    const traces = traceSetOf({ times_us, shotsPerTime, distances: [1], value: [[0, 0.08, 0.04, 1]] });
    // Pool of samples 1 and 2: value 0.05 at 17.5 µs; then to 1 at 40 µs.
    const time = 17.5 + (0.05 / 0.95) * 22.5;
    expect(crossingsOf(traces, DEFAULT_FRONT_RULE)[0].time_us).toBeCloseTo(time, 12);
  });

  test("a first pool at the level is at-start, at the pool's own time", () => {
    const crossing = crossingOf([0.3, 0.1, 1]);
    expect(crossing.status).toBe("at-start");
    expect(crossing.time_us).toBeCloseTo(15, 12);
  });

  test("samples after the maximum do not matter", () => {
    expect(crossingOf([0, 0.05, 0.3, 1, 0.2, -0.5]).time_us).toBe(crossingOf([0, 0.05, 0.3, 1, 0.9, 0.9]).time_us);
  });
});

describe("method last-upcrossing", () => {
  test("takes the last rise through the level before the maximum", () => {
    expect(crossingOf([0, 0.3, 0, 0.2, 1], { method: "last-upcrossing" }).time_us).toBeCloseTo(35, 12);
    expect(crossingOf([0, 0.3, 0, 0.2, 1], { method: "first", hold: 1 }).time_us).toBeCloseTo(10 + 10 / 3, 12);
  });

  test("samples after the maximum do not matter", () => {
    expect(crossingOf([0, 0.05, 1, -0.5, 0.4], { method: "last-upcrossing" }).time_us).toBe(crossingOf([0, 0.05, 1, 0.9, 0.9], { method: "last-upcrossing" }).time_us);
  });

  test("a signal never below the level before its maximum is at-start, at the first time", () => {
    const crossing = crossingOf([0.2, 0.4, 1], { method: "last-upcrossing" });
    expect(crossing.status).toBe("at-start");
    expect(crossing.time_us).toBe(10);
  });

  test("a fixed level above the maximum is not crossed", () => {
    expect(crossingOf([0, 0.1, 0.3], { method: "last-upcrossing", rule: "fixed-level", level: 0.4 }).status).toBe("no-crossing");
  });
});

describe("the level", () => {
  test("a fixed level above the maximum is not crossed", () => {
    expect(crossingOf([0, 0.1, 0.3], { rule: "fixed-level", level: 0.4 }).status).toBe("no-crossing");
  });

  test("a fixed level is the correlation itself", () => {
    expect(crossingOf([0, 0.1, 0.3], { rule: "fixed-level", level: 0.2 }).time_us).toBeCloseTo(25, 12);
  });

  test("a multiple of the noise uses the median standard error up to the maximum", () => {
    const crossing = crossingOf([0, 0.1, 0.3, 0.2], { rule: "noise-multiple", level: 4 }, [0.01, 0.03, 0.02, 0.9]);
    expect(crossing.level).toBeCloseTo(0.08, 12);
    expect(crossing.time_us).toBeCloseTo(18, 12);
  });
});

describe("orientation and resolution", () => {
  test("absolute takes |C|, so a first swing of the other sign counts", () => {
    expect(crossingOf([0, -0.2, -0.2, 1], { method: "first" }).time_us).toBeCloseTo(30 + 10 / 4, 12);
    expect(crossingOf([0, -0.2, -0.2, 1], { method: "first", absolute: true }).time_us).toBeCloseTo(15, 12);
  });

  test("a maximum of less than minSignal errors is unresolved, exactly that many is resolved", () => {
    expect(crossingOf([0, 0.5, 1], {}, [0.1, 0.1, 0.21]).status).toBe("unresolved");
    expect(crossingOf([0, 0.5, 1], {}, [0.1, 0.1, 0.2]).status).toBe("resolved");
  });

  test("a trace of zeros is unresolved and has no crossing, even without error bars", () => {
    const crossing = crossingOf([0, 0, 0], {}, [0, 0, 0]);
    expect(crossing.status).toBe("unresolved");
    expect(crossing.time_us).toBeNaN();
  });

  test("times without a value are left out", () => {
    const crossing = crossingOf([0, NaN, 0.2, 1], { method: "first" });
    expect(crossing.time_us).toBeCloseTo(20, 12);
    expect(crossingOf([NaN, NaN, NaN]).status).toBe("unresolved");
  });
});

describe("warnings", () => {
  const rise = [0, 0.05, 0.3, 1, 0.5];

  test("none for a clear signal with its maximum inside the window", () => {
    expect(crossingOf(rise).warnings).toEqual([]);
  });

  test("level-in-noise when the level is below two errors at the crossing", () => {
    const errors = (atCrossing: number) => [0.01, atCrossing, atCrossing, 0.01, 0.01];
    expect(crossingOf(rise, {}, errors(0.051)).warnings).toEqual(["level-in-noise"]);
    expect(crossingOf(rise, {}, errors(0.049)).warnings).toEqual([]);
  });

  test("level-above-0.2 only for a higher share of a maximum under 15 errors", () => {
    const errors = rise.map(() => 0.07);
    expect(crossingOf(rise, { level: 0.3 }, errors).warnings).toEqual(["level-above-0.2"]);
    expect(
      crossingOf(
        rise,
        { level: 0.3 },
        rise.map(() => 0.06),
      ).warnings,
    ).toEqual([]);
    expect(crossingOf(rise, { level: 0.2 }, errors).warnings).toEqual([]);
  });

  test("maximum-at-window-edge when the largest signal is the last sample", () => {
    expect(crossingOf([0, 0.05, 0.3, 1]).warnings).toEqual(["maximum-at-window-edge"]);
  });
});
