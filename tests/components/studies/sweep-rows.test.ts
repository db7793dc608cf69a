import { describe, expect, it } from "vitest";
import { sweepDomain, sweepRows } from "@/components/studies/sweep-rows";
import { judgeSweep } from "@/lib/science/studies/judge-sweep";
import type { SweepChoices } from "@/lib/science/studies/sweep-choices";
import type { SweepCombination } from "@/lib/science/studies/sweep-result";

const saved: SweepChoices = { thresholdShift: 0, readoutCorrection: false, traces: { kind: "reference", site: 0 }, level: 0.1, method: "isotonic", hold: 2, firstLeftOut: 0, lastLeftOut: 0 };

function combination(changes: Partial<SweepChoices>, beta: number | null): SweepCombination {
  const choices = { ...saved, ...changes };
  if (beta === null) return { choices, gamma: null, beta: null, v_sites_per_ms: null, points: 2, reason: "There are 2." };
  return { choices, gamma: { value: 1 / beta, error: 0.05 / beta ** 2 }, beta: { value: beta, error: 0.05 }, v_sites_per_ms: { value: 10, error: 1 }, points: 5, reason: null };
}

const sweep = judgeSweep(
  [
    combination({}, 1.4),
    combination({ level: 0.05 }, 1.5),
    combination({ thresholdShift: 1 }, 1.42),
    combination({ thresholdShift: -1 }, null),
    combination({ level: 0.05, thresholdShift: 1 }, 9),
  ],
  { value: 1 / 1.4, error: 0.03 },
);

describe("the rows of a sweep", () => {
  const rows = sweepRows(sweep);

  it("begin with the saved choices, then go choice by choice, the weightiest first", () => {
    expect(rows.map(({ text }) => text)).toEqual(["as saved", "level", "level 0.05", "threshold", "θ + 1", "θ − 1"].map((text) => text.replace("−", "\u2212")));
  });

  it("show with every option all combinations that choose it, and those without a fit nowhere", () => {
    const among = rows.flatMap((row) => (row.kind === "option" ? [row.among] : []));
    expect(among).toEqual([[1.4, 1.5, 1.42, 9], [1.5, 9], [1.42, 9], []]);
  });

  it("span single changes with their errors and the middle of all", () => {
    const [low, high] = sweepDomain(rows, sweep);
    expect(low).toBeLessThan(1.35);
    expect(high).toBeGreaterThan(sweep.middle?.high ?? Infinity);
  });

  it("have a span even without any fit", () => {
    expect(sweepDomain([], { middle: null })).toEqual([0, 2]);
  });
});
