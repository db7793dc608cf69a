import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { crossingsOf } from "@/lib/science/front/analyse-front";
import { softenErrors } from "@/lib/science/front/front-points";
import { DEFAULT_FRONT_RULE, type FrontRule } from "@/lib/science/front/front-rule";
import { linearFitter } from "@/lib/science/front/front-fitters";
import { replicateCrossings, spreadOfCrossings } from "@/lib/science/front/replicate-crossings";
import { fitReplicates, type FrontFitter } from "@/lib/science/front/replicate-fits";
import { traceSetOf } from "./run-fixtures";

const rule = (changes: Partial<FrontRule> = {}): FrontRule => ({ ...DEFAULT_FRONT_RULE, ...changes });

describe("crossings in replicates", () => {
  /** 1 to 140 replicates, so that the last block of the kernel is full, partial or the only one. */
  const anySet = fc
    .record({ replicateCount: fc.integer({ min: 1, max: 140 }), seed: fc.integer({ min: 1, max: 1e6 }) })
    .map(({ replicateCount, seed }) => {
      let state = seed;
      const draw = () => (state = (state * 48271) % 2147483647) / 2147483647 - 0.4;
      const traces = () => [0, 1, 2].map(() => Array.from({ length: 9 }, draw));
      const times_us = Array.from({ length: 9 }, (_, k) => 3 * k + 1);
      const replicates = Array.from({ length: replicateCount }, traces);
      return { replicates, traces: traceSetOf({ times_us, distances: [1, 2, 3], value: traces(), replicates }) };
    });

  test("are those of each replicate taken as a trace of its own", () => {
    const rules = [rule(), rule({ method: "first", hold: 3 }), rule({ absolute: true, level: 0.5, method: "first" })];
    fc.assert(
      fc.property(anySet, fc.constantFrom(...rules), ({ traces, replicates }, chosen) => {
        const tau = replicateCrossings(traces, chosen, new Float64Array(3));
        replicates.forEach((value, b) => {
          const alone = crossingsOf(
            traceSetOf({ times_us: [...traces.times_us], distances: [1, 2, 3], value }),
            chosen,
          );
          alone.forEach(({ time_us }, j) => expect(tau[j * traces.replicateCount + b]).toBe(time_us));
        });
      }),
      { numRuns: 40 },
    );
  });

  test("use the full data's level under the other rules", () => {
    const traces = traceSetOf({
      times_us: [1, 2, 3],
      distances: [1],
      value: [[0, 0.2, 1]],
      replicates: [[[0, 0.4, 1]], [[0, 0, 0.1]]],
    });
    expect([...replicateCrossings(traces, rule({ rule: "fixed-level" }), Float64Array.of(0.2))]).toEqual([1.5, NaN]);
  });

  test("need no resolved signal, and count a signal already at the level", () => {
    const replicates = [[[0, 1e-9, 2e-9]], [[0.5, 0.6, 1]]];
    const traces = traceSetOf({ times_us: [10, 20, 30], distances: [1], value: [[0, 0.2, 1]], replicates });
    const tau = replicateCrossings(traces, rule(), new Float64Array(1));
    expect(tau[0]).toBeCloseTo(12, 12);
    expect(tau[1]).toBe(10);
  });
});

describe("the spread of crossings", () => {
  test("is the standard deviation with n − 1 and the type 7 quantiles of those that cross", () => {
    const spread = spreadOfCrossings(Float64Array.of(4, NaN, 2, 6, NaN));
    expect(spread.error_us).toBeCloseTo(2, 12);
    expect(spread.low_us).toBeCloseTo(2.1, 12);
    expect(spread.high_us).toBeCloseTo(5.9, 12);
    expect(spread.failedShare).toBeCloseTo(0.4, 12);
  });

  test("is undefined when fewer than two cross", () => {
    expect(spreadOfCrossings(Float64Array.of(4, NaN)).error_us).toBeNaN();
    expect(spreadOfCrossings(new Float64Array(0)).failedShare).toBeNaN();
  });
});

describe("fits in replicates", () => {
  const error_us = Float64Array.of(1, 2, 3, 4);
  const points = {
    trace: Int32Array.of(0, 2, 3, 4),
    distance: Float64Array.of(1, 2, 3, 4),
    time_us: Float64Array.of(1, 2, 3, 4),
    error_us,
    softened_us: softenErrors(error_us),
    covariance: null,
  };
  const straight: FrontFitter = linearFitter(points, false);

  test("leave a missing crossing out of that replicate's fit only, with the errors of the full data", () => {
    fc.assert(
      fc.property(
        fc.array(
          fc.array(fc.oneof({ weight: 5, arbitrary: fc.double({ min: 1, max: 50, noNaN: true }) }, fc.constant(NaN)), {
            minLength: 5,
            maxLength: 5,
          }),
          { minLength: 1, maxLength: 6 },
        ),
        (replicates) => {
          const count = replicates.length;
          const tau = Float64Array.from(
            { length: 5 * count },
            (_, at) => replicates[at % count][Math.floor(at / count)],
          );
          const fits = fitReplicates(points, tau, count, -Infinity, straight);
          replicates.forEach((times, b) => {
            const present = [0, 1, 2, 3].filter((p) => Number.isFinite(times[points.trace[p]]));
            if (present.length < 3) {
              expect(fits.slope[b]).toBeNaN();
              return;
            }
            const pick = (of: (p: number) => number) => Float64Array.from(present, of);
            const alone = straight(
              pick((p) => points.distance[p]),
              pick((p) => times[points.trace[p]]),
              pick((p) => points.softened_us[p]),
              Int32Array.from(present),
            );
            expect([fits.offset[b], fits.slope[b]]).toEqual([alone.offset, alone.slope]);
          });
          expect(fits.fitted).toBe([...fits.slope].filter((slope) => !Number.isNaN(slope)).length);
        },
      ),
    );
  });
});
