import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { quantileSorted } from "@/lib/science/stats/quantiles";
import { selectRank, tailQuantiles } from "@/lib/science/stats/selection";

const Values = fc.array(fc.oneof(fc.double({ noNaN: true, noDefaultInfinity: true }), fc.integer({ min: -3, max: 3 })), { minLength: 1, maxLength: 200 });

describe("selection", () => {
  it("finds every rank that sorting finds", () => {
    fc.assert(
      fc.property(Values, (list) => {
        const sorted = Float64Array.from(list).sort();
        for (let rank = 0; rank < list.length; rank++) {
          expect(selectRank(Float64Array.from(list), rank, 0, list.length - 1) === sorted[rank]).toBe(true);
        }
      }),
    );
  });

  it("gives the type 7 quantiles of both tails", () => {
    fc.assert(
      fc.property(Values, fc.constantFrom(0.025, 0.05, 0.25, 0.4), (list, p) => {
        const sorted = Float64Array.from(list).sort();
        const [low, high] = tailQuantiles(Float64Array.from(list), p);
        expect(low === quantileSorted(sorted, p)).toBe(true);
        expect(high === quantileSorted(sorted, 1 - p)).toBe(true);
      }),
    );
    expect(tailQuantiles(new Float64Array(0), 0.025)).toEqual([Number.NaN, Number.NaN]);
  });
});
