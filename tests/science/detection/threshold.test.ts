import { readFileSync } from "node:fs";
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { advisePoissonThreshold, poissonErrorRates } from "@/lib/science/detection/threshold";

interface Row {
  dark: number;
  bright: number;
  realThreshold: number;
  last: number;
  falseBright: number;
  falseDark: number;
}
const table: Row[] = JSON.parse(readFileSync("tests/fixtures/checks/statistics.json", "utf8")).poisson_discrimination;

describe("the advised threshold for Poisson counts", () => {
  it.each(table)("is $last + ½ for means $dark and $bright, with the error rates of the table", (row) => {
    const threshold = advisePoissonThreshold(row.dark, row.bright);
    const rates = poissonErrorRates(threshold, row.dark, row.bright);
    expect(threshold).toBe(row.last + 0.5);
    expect(rates.falseBright / row.falseBright).toBeCloseTo(1, 12);
    expect(rates.falseDark / row.falseDark).toBeCloseTo(1, 12);
  });

  it("is the half-integer that a search finds", () => {
    const rate = fc.double({ min: 0, max: 40, noNaN: true });
    fc.assert(
      fc.property(rate, rate, (a, b) => {
        const [dark, bright] = [Math.min(a, b), Math.max(a, b)];
        fc.pre(bright - dark > 1e-3);
        const sum = (threshold: number) => {
          const rates = poissonErrorRates(threshold, dark, bright);
          return rates.falseBright + rates.falseDark;
        };
        const advised = advisePoissonThreshold(dark, bright);
        for (let n = 0; n < 80; n++) expect(sum(advised)).toBeLessThanOrEqual(sum(n + 0.5) + 1e-14);
      }),
    );
  });

  it("is one of two equals where the balance falls on a whole count", () => {
    // With bright = 4 dark, Poisson(n; dark) = Poisson(n; bright) at n = 3 dark / ln 4, here n = 3.
    const dark = Math.log(4);
    const sum = (threshold: number) => {
      const rates = poissonErrorRates(threshold, dark, 4 * dark);
      return rates.falseBright + rates.falseDark;
    };
    expect(sum(2.5)).toBeCloseTo(sum(3.5), 14);
    expect(advisePoissonThreshold(dark, 4 * dark)).toBe(2.5);
  });

  it("is ½ when dark shots never count", () => {
    expect(advisePoissonThreshold(0, 7)).toBe(0.5);
    expect(poissonErrorRates(0.5, 0, 7).falseBright).toBe(0);
  });

  it("reads bright above θ strictly: θ = 3 and θ = 3.5 are the same, and below zero everything is bright", () => {
    expect(poissonErrorRates(3, 1, 9)).toEqual(poissonErrorRates(3.5, 1, 9));
    expect(poissonErrorRates(-0.5, 1, 9)).toEqual({ falseBright: 1, falseDark: 0 });
  });
});
