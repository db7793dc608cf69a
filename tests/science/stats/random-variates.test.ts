import { describe, expect, it } from "vitest";
import { createRandomStream, type RandomStream } from "@/lib/science/stats/philox";
import { binomialDensity, poissonDensity } from "@/lib/science/stats/gamma-functions";
import { drawBeta, drawBinomial, drawGamma, drawNormal, drawPoisson } from "@/lib/science/stats/random-variates";
import {
  chiSquareSurvival,
  normalCdf,
  regularisedBeta,
  regularisedGammaP,
} from "@/lib/science/stats/special-functions";

const DRAWS = 50_000;

function draws(draw: (stream: RandomStream) => number): number[] {
  const stream = createRandomStream(7, 3, 0);
  return Array.from({ length: DRAWS }, () => draw(stream));
}

/** Kolmogorov's statistic; above 2.2 only once in 8 000 samples of the right law. */
function kolmogorov(values: number[], cdf: (x: number) => number): number {
  const sorted = values.slice().sort((a, b) => a - b);
  let widest = 0;
  sorted.forEach((value, s) => {
    const p = cdf(value);
    widest = Math.max(widest, p - s / sorted.length, (s + 1) / sorted.length - p);
  });
  return widest * Math.sqrt(sorted.length);
}

/** p-value of Pearson's χ² over the whole numbers expected at least ten times, the rest together. */
function pearson(values: number[], density: (n: number) => number): number {
  const seen = new Map<number, number>();
  for (const value of values) seen.set(value, (seen.get(value) ?? 0) + 1);
  const largest = Math.max(...values);
  let [chiSquare, bins, expectedRest, seenRest] = [0, 0, values.length, values.length];
  for (let n = 0; n <= largest; n++) {
    const expected = values.length * density(n);
    if (expected < 10) continue;
    const count = seen.get(n) ?? 0;
    chiSquare += (count - expected) ** 2 / expected;
    expectedRest -= expected;
    seenRest -= count;
    bins += 1;
  }
  if (expectedRest > 5) chiSquare += (seenRest - expectedRest) ** 2 / expectedRest;
  return chiSquareSurvival(chiSquare, bins);
}

describe("random variates follow their law", () => {
  it("normal", () => {
    expect(kolmogorov(draws(drawNormal), normalCdf)).toBeLessThan(2.2);
  });

  it.each([0.5, 1, 3.7, 250])("gamma with shape %s", (shape) => {
    const values = draws((stream) => drawGamma(stream, shape));
    expect(kolmogorov(values, (x) => regularisedGammaP(shape, x))).toBeLessThan(2.2);
  });

  it.each([
    [0.5, 2000.5],
    [76.5, 1924.5],
    [0.7, 0.6],
  ])("beta with shapes %s and %s", (a, b) => {
    const values = draws((stream) => drawBeta(stream, a, b));
    expect(kolmogorov(values, (x) => regularisedBeta(x, a, b))).toBeLessThan(2.2);
  });

  it.each([0, 0.3, 9.9, 10, 45, 900])("Poisson with mean %s", (rate) => {
    expect(
      pearson(
        draws((stream) => drawPoisson(stream, rate)),
        (n) => poissonDensity(n, rate),
      ),
    ).toBeGreaterThan(1e-4);
  });

  it.each([
    [1, 0.4],
    [20, 0.1],
    [40, 0.3],
    [100, 0.9],
    [4000, 0.25],
    [4000, 0.0005],
  ])("binomial of %s trials with probability %s", (trials, p) => {
    const values = draws((stream) => drawBinomial(stream, trials, p));
    const density = (n: number) => {
      if (n === 0) return (1 - p) ** trials;
      return n === trials ? p ** trials : binomialDensity(n, trials - n, p);
    };
    expect(values.every((n) => Number.isInteger(n) && n >= 0 && n <= trials)).toBe(true);
    expect(pearson(values, density)).toBeGreaterThan(1e-4);
  });

  it("at the edges without chance", () => {
    const stream = createRandomStream(1, 3, 0);
    expect(drawBinomial(stream, 0, 0.5)).toBe(0);
    expect(drawBinomial(stream, 50, 0)).toBe(0);
    expect(drawBinomial(stream, 50, 1)).toBe(50);
    expect(drawPoisson(stream, 0)).toBe(0);
  });
});

describe("random variates", () => {
  it("are the same again from the same seed", () => {
    expect(draws((stream) => drawBeta(stream, 2.5, 40))).toEqual(draws((stream) => drawBeta(stream, 2.5, 40)));
  });

  it("refuse parameters outside their domain", () => {
    const stream = createRandomStream(1, 3, 0);
    expect(() => drawGamma(stream, 0)).toThrow(RangeError);
    expect(() => drawPoisson(stream, -1)).toThrow(RangeError);
    expect(() => drawBinomial(stream, 2.5, 0.5)).toThrow(RangeError);
    expect(() => drawBinomial(stream, 2, 1.5)).toThrow(RangeError);
  });
});
