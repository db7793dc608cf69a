import { describe, expect, it } from "vitest";
import { adjustedPValues, discoveries } from "@/lib/science/stats/false-discovery";
import { publishedChecks } from "./published-checks";

// Benjamini and Hochberg (1995), J. R. Stat. Soc. B 57, 289: the fifteen p-values of their example.
const { pValues, adjusted } = publishedChecks().benjaminiHochberg;

describe("the example of Benjamini and Hochberg (1995)", () => {
  it("has the adjusted p-values of the table", () => {
    const found = adjustedPValues(Float64Array.from(pValues));
    adjusted.forEach((value, at) => expect(found[at]).toBeCloseTo(value, 12));
  });

  it("rejects four hypotheses at 5 %, where Bonferroni's limit rejects three", () => {
    const found = discoveries(Float64Array.from(pValues), 0.05);
    expect([...found]).toEqual([1, 1, 1, 1, ...new Array<number>(11).fill(0)]);
    expect(pValues.filter((p) => p <= 0.05 / pValues.length)).toHaveLength(3);
  });

  it("gives the same values in another order", () => {
    const turned = adjustedPValues(Float64Array.from(pValues).reverse()).reverse();
    adjusted.forEach((value, at) => expect(turned[at]).toBeCloseTo(value, 12));
  });
});
