import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { adjustedPValues, discoveries } from "@/lib/science/stats/false-discovery";

describe("adjusted p-values", () => {
  it("keep the order of the p-values, are not below them and not above 1", () => {
    fc.assert(
      fc.property(fc.array(fc.double({ min: 0, max: 1, noNaN: true }), { minLength: 1, maxLength: 60 }), (list) => {
        const pValues = Float64Array.from(list);
        const adjusted = adjustedPValues(pValues);
        for (let a = 0; a < list.length; a++) {
          expect(adjusted[a]).toBeGreaterThanOrEqual(pValues[a]);
          expect(adjusted[a]).toBeLessThanOrEqual(1);
          for (let b = 0; b < list.length; b++) if (pValues[a] <= pValues[b]) expect(adjusted[a]).toBeLessThanOrEqual(adjusted[b]);
        }
      }),
    );
  });

  it("leave out what is not a number", () => {
    expect([...adjustedPValues(Float64Array.of(0.01, Number.NaN, 0.04))]).toEqual([0.02, Number.NaN, 0.04]);
    expect([...discoveries(Float64Array.of(0.01, Number.NaN, 0.06), 0.05)]).toEqual([1, 0, 0]);
  });
});
