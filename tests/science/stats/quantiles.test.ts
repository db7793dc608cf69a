import { quantileSorted as quantileOfD3 } from "d3";
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { median, quantile, quantileSorted } from "@/lib/science/stats/quantiles";

const finite = fc.double({ min: -1e6, max: 1e6, noNaN: true });

describe("type 7 quantiles", () => {
  it("interpolate between order statistics at (n − 1) p (Hyndman and Fan 1996)", () => {
    expect(quantileSorted([1, 2, 3, 4], 0.1)).toBeCloseTo(1.3, 14);
    expect(quantileSorted([1, 2, 3, 4], 0)).toBe(1);
    expect(quantileSorted([1, 2, 3, 4], 1)).toBe(4);
    expect(quantile([4, 1, 3, 2], 0.25)).toBe(1.75);
    expect(median([5, 1, 4])).toBe(4);
    expect(median([5, 1])).toBe(3);
    expect(median([])).toBeNaN();
  });

  it("agree with another implementation of R-7 (d3)", () => {
    fc.assert(
      fc.property(fc.array(finite, { minLength: 1 }), fc.double({ min: 0, max: 1, noNaN: true }), (values, p) => {
        const sorted = values.slice().sort((a, b) => a - b);
        expect(quantileSorted(sorted, p)).toBeCloseTo(quantileOfD3(sorted, p) ?? Number.NaN, 6);
      }),
    );
  });

  it("do not depend on order and leave their input as it is", () => {
    fc.assert(
      fc.property(fc.array(finite, { minLength: 1 }), (values) => {
        const before = values.slice();
        expect(quantile(values, 0.3)).toBe(quantile(values.slice().reverse(), 0.3));
        expect(values).toEqual(before);
      }),
    );
  });
});
