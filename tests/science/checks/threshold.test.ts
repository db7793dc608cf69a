import { readFileSync } from "node:fs";
import { describe, expect, it } from "vitest";
import { advisePoissonThreshold } from "@/lib/science/detection/threshold";
import { poissonDensity } from "@/lib/science/stats/gamma-functions";

interface Row {
  dark: number;
  bright: number;
  realThreshold: number;
  last: number;
}
// Numeric checks, section 1: equal priors, n ln(λb/λd) > λb − λd.
const table: Row[] = JSON.parse(readFileSync("tests/fixtures/checks/statistics.json", "utf8")).poisson_discrimination;

describe.each(table)("Poisson counts of means $dark and $bright", ({ dark, bright, realThreshold, last }) => {
  it("balance at the tabulated real threshold, and the advised one reads bright from the next whole count", () => {
    expect((bright - dark) / Math.log(bright / dark)).toBeCloseTo(realThreshold, 12);
    expect(Math.floor(realThreshold)).toBe(last);
    expect(advisePoissonThreshold(dark, bright)).toBe(last + 0.5);
    expect(poissonDensity(last, dark)).toBeGreaterThan(poissonDensity(last, bright));
    expect(poissonDensity(last + 1, dark)).toBeLessThan(poissonDensity(last + 1, bright));
  });
});
