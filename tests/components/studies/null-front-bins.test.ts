import * as fc from "fast-check";
import { describe, expect, it } from "vitest";
import { gammaBins } from "@/components/studies/null-front-bins";

describe("the histogram of simulated γ", () => {
  it("counts every run with a fit once, in bins inside a span that holds the observed γ", () => {
    fc.assert(
      fc.property(fc.array(fc.option(fc.double({ min: 0.1, max: 3, noNaN: true })), { maxLength: 80 }), fc.double({ min: 0.1, max: 3, noNaN: true }), (gammas, observed) => {
        const { bins, domain } = gammaBins(gammas, observed);
        const fitted = gammas.filter((gamma) => gamma !== null).length;
        const counted = bins.reduce((sum, { count }) => sum + count, 0);
        expect(counted).toBe(fitted);
        if (fitted > 0) expect(domain[0] < observed && observed < domain[1]).toBe(true);
        expect(bins.every(({ from, to }) => domain[0] <= from && from < to && to <= domain[1])).toBe(true);
      }),
    );
  });

  it("is empty without a fit", () => {
    expect(gammaBins([null, null], 1)).toEqual({ bins: [], domain: [0, 1] });
  });
});
