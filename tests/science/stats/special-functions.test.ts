import { readFileSync } from "node:fs";
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { poissonDensity } from "@/lib/science/stats/gamma-functions";
import {
  chiSquareSurvival,
  inverseRegularisedBeta,
  logGamma,
  normalCdf,
  normalQuantile,
  poissonCdf,
  poissonSurvival,
  regularisedBeta,
  regularisedGammaP,
  regularisedGammaQ,
} from "@/lib/science/stats/special-functions";

const checks = JSON.parse(readFileSync("tests/fixtures/checks/statistics.json", "utf8"));
/** Values of 40-digit arithmetic. */
const exact: Record<string, number[][]> = checks.special_functions;

const FUNCTIONS: Record<string, (...args: number[]) => number> = {
  logGamma,
  normalCdf,
  poissonDensity,
  regularisedBeta,
  regularisedGammaP,
  regularisedGammaQ,
};

function relativeError(value: number, truth: number): number {
  return Math.abs(value / truth - 1);
}

describe("special functions", () => {
  const rows = Object.keys(FUNCTIONS).flatMap((name) => exact[name].map((row) => ({ name, row })));

  it.each(rows)("$name agrees with 40-digit arithmetic on $row", ({ name, row }) => {
    const truth = row[row.length - 1];
    // An exponential of e multiplies the rounding of its argument by |ln value|.
    const tolerance = 1e-14 + 3e-16 * Math.abs(Math.log(Math.abs(truth)));
    expect(relativeError(FUNCTIONS[name](...row.slice(0, -1)), truth)).toBeLessThan(tolerance);
  });

  it.each(checks.chi_square_survival as number[][])("χ² of %s with %s degrees of freedom has p = %s", (x, dof, p) => {
    expect(chiSquareSurvival(x, dof)).toBeCloseTo(p, 12);
  });

  it.each(checks.poisson_cdf as number[][])("P(N ≤ %s) at mean %s is %s (printed tables)", (n, rate, p) => {
    expect(poissonCdf(n, rate)).toBeCloseTo(p, 10);
  });

  it("answers the edges of each domain, and NaN outside", () => {
    expect(regularisedGammaP(2, 0)).toBe(0);
    expect(regularisedGammaQ(2, Number.POSITIVE_INFINITY)).toBe(0);
    expect(regularisedBeta(0, 1, 1)).toBe(0);
    expect(regularisedBeta(1, 1, 1)).toBe(1);
    expect(normalQuantile(0)).toBe(Number.NEGATIVE_INFINITY);
    expect(normalQuantile(1)).toBe(Number.POSITIVE_INFINITY);
    expect(poissonCdf(-1, 3)).toBe(0);
    expect(poissonSurvival(-0.5, 3)).toBe(1);
    expect(logGamma(0)).toBe(Number.POSITIVE_INFINITY);
    for (const wrong of [
      regularisedGammaP(0, 1),
      regularisedGammaQ(1, -1),
      regularisedBeta(1.1, 1, 1),
      normalQuantile(2),
    ]) {
      expect(wrong).toBeNaN();
    }
  });

  it("sums Poisson probabilities to its distribution function", () => {
    fc.assert(
      fc.property(fc.integer({ min: 0, max: 80 }), fc.double({ min: 0.01, max: 60, noNaN: true }), (n, rate) => {
        let sum = 0;
        for (let m = 0; m <= n; m++) sum += poissonDensity(m, rate);
        expect(poissonCdf(n, rate)).toBeCloseTo(sum, 12);
        expect(poissonCdf(n, rate) + poissonSurvival(n, rate)).toBeCloseTo(1, 14);
      }),
    );
  });

  it("inverts the normal distribution function", () => {
    fc.assert(
      fc.property(fc.double({ min: 1e-12, max: 0.5, noNaN: true, minExcluded: true }), (p) => {
        expect(relativeError(normalCdf(normalQuantile(p)), p)).toBeLessThan(1e-13);
        expect(normalQuantile(p)).toBeCloseTo(-normalQuantile(1 - p), 3);
      }),
    );
  });

  it("inverts the incomplete beta function", () => {
    // Below shape 1 the density is unbounded at the edge, and no double x comes close enough.
    const shape = fc.double({ min: 1, max: 5000, noNaN: true });
    fc.assert(
      fc.property(fc.double({ min: 1e-6, max: 1 - 1e-6, noNaN: true }), shape, shape, (p, a, b) => {
        expect(regularisedBeta(inverseRegularisedBeta(p, a, b), a, b)).toBeCloseTo(p, 10);
      }),
    );
  });

  it("mirrors the incomplete beta function", () => {
    const shape = fc.double({ min: 0.5, max: 500, noNaN: true });
    fc.assert(
      fc.property(fc.double({ min: 0.01, max: 0.99, noNaN: true }), shape, shape, (x, a, b) => {
        expect(regularisedBeta(x, a, b)).toBeCloseTo(1 - regularisedBeta(1 - x, b, a), 12);
      }),
    );
  });
});
