import * as fc from "fast-check";
import { describe, expect, it } from "vitest";
import { CHOICE_NAMES, choiceKey, differingChoices, type SweepChoices } from "@/lib/science/studies/sweep-choices";
import { designSweep, type SweepRoom } from "@/lib/science/studies/sweep-design";

const saved: SweepChoices = { thresholdShift: 0, readoutCorrection: false, traces: { kind: "reference", site: 0 }, level: 0.1, method: "isotonic", hold: 2, firstLeftOut: 0, lastLeftOut: 0 };
const room: SweepRoom = { saved, rule: "fraction-of-max", sites: 16, times: 40, thresholdShifts: [-1, 0, 1], correctable: [true, true, true] };
const design = designSweep(room);
const keyOf = (choices: SweepChoices) => CHOICE_NAMES.map((name) => choiceKey(name, choices)).join();

describe("the design of a sweep", () => {
  it("has about 200 combinations, the saved one first and none twice", () => {
    expect(design.length).toBeGreaterThan(150);
    expect(design.length).toBeLessThanOrEqual(256);
    expect(design[0]).toEqual(saved);
    expect(new Set(design.map(keyOf)).size).toBe(design.length);
  });

  it("holds the full factorial of thresholds, levels, kinds of traces and correction", () => {
    const keys = new Set(design.map(keyOf));
    for (const thresholdShift of [-1, 0, 1]) {
      for (const level of [0.05, 0.1, 0.15, 0.2, 0.3]) {
        for (const traces of [saved.traces, { kind: "distance" as const }]) {
          for (const readoutCorrection of [false, true]) {
            expect(keys.has(keyOf({ ...saved, thresholdShift, level, traces, readoutCorrection }))).toBe(true);
          }
        }
      }
    }
  });

  it("holds every pair of alternatives of two choices: as many as the alternatives say", () => {
    const single = CHOICE_NAMES.map((name) => design.filter((choices) => differingChoices(choices, saved).join() === name).length);
    const pairs = design.filter((choices) => differingChoices(choices, saved).length === 2).length;
    const expected = single.reduce((sum, count, at) => sum + single.slice(at + 1).reduce((inner, other) => inner + count * other, 0), 0);
    expect(single).toEqual([2, 4, 4, 4, 1, 2, 2]);
    expect(pairs).toBe(expected);
  });

  it("never corrects at a threshold without error rates", () => {
    const half = designSweep({ ...room, correctable: [false, true, false] });
    expect(half.some(({ readoutCorrection }) => readoutCorrection)).toBe(true);
    expect(half.filter(({ readoutCorrection }) => readoutCorrection).every(({ thresholdShift }) => thresholdShift === 0)).toBe(true);
  });

  it("stretches a level that is no share of the maximum", () => {
    const levels = new Set(designSweep({ ...room, rule: "noise-multiple", saved: { ...saved, level: 4 } }).map(({ level }) => level));
    expect(Array.from(levels).sort((one, other) => one - other)).toEqual([2, 3, 4, 6, 8]);
  });

  it("keeps at least five times, one saved combination and the cap in any run", () => {
    fc.assert(
      fc.property(fc.integer({ min: 2, max: 64 }), fc.integer({ min: 1, max: 60 }), fc.boolean(), fc.integer({ min: 0, max: 63 }), (sites, times, isWhole, site) => {
        const thresholdShifts = isWhole ? [-1, 0, 1] : [0];
        const own = { ...saved, traces: { kind: "reference" as const, site: site % sites } };
        const made = designSweep({ ...room, saved: own, sites, times, thresholdShifts, correctable: thresholdShifts.map(() => true) });
        expect(made[0]).toEqual(own);
        expect(made.length).toBeLessThanOrEqual(256);
        expect(made.every(({ firstLeftOut, lastLeftOut }) => times - firstLeftOut - lastLeftOut >= Math.min(times, 5))).toBe(true);
        expect(made.every(({ traces }) => traces.kind === "distance" || traces.site < sites)).toBe(true);
      }),
      { numRuns: 60 },
    );
  });
});
