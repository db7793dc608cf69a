import { readFileSync } from "node:fs";
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { fitWeightedLine, fitWeightedLineThroughOrigin } from "@/lib/science/stats/least-squares";

interface Certified {
  p: number[];
  sd: number[];
  rss: number;
}
const certified: { Norris: Certified; NoInt1: Certified } = JSON.parse(
  readFileSync("tests/fixtures/checks/statistics.json", "utf8"),
).nist;

/** NIST StRD data files: y, x per line. */
function readNist(name: string): { x: number[]; y: number[]; weights: number[] } {
  const lines = readFileSync(`tests/fixtures/checks/nist/${name}.csv`, "utf8").split("\n");
  const rows = lines.filter((line) => line !== "" && !line.startsWith("#")).map((line) => line.split(",").map(Number));
  return { x: rows.map((row) => row[1]), y: rows.map((row) => row[0]), weights: rows.map(() => 1) };
}

function expectDigits(value: number, truth: number, digits = 12): void {
  expect(Math.abs(value / truth - 1)).toBeLessThan(10 ** -digits);
}

describe("a weighted straight line", () => {
  it("reproduces NIST Norris to 12 digits", () => {
    const { x, y, weights } = readNist("Norris");
    const fit = fitWeightedLine(x, y, weights);
    const { p, sd, rss } = certified.Norris;
    const scatter = Math.sqrt(rss / (x.length - 2));
    expect(x.length).toBe(36);
    expectDigits(fit.intercept, p[0], 11);
    expectDigits(fit.slope, p[1]);
    expectDigits(fit.chiSquare, rss);
    expectDigits(fit.interceptError * scatter, sd[0]);
    expectDigits(fit.slopeError * scatter, sd[1]);
  });

  it("reproduces NIST NoInt1, through the origin, to 12 digits", () => {
    const { x, y, weights } = readNist("NoInt1");
    const fit = fitWeightedLineThroughOrigin(x, y, weights);
    const { p, sd, rss } = certified.NoInt1;
    expect(x.length).toBe(11);
    expectDigits(fit.slope, p[0]);
    expectDigits(fit.chiSquare, rss);
    expectDigits(fit.slopeError * Math.sqrt(rss / (x.length - 1)), sd[0]);
  });

  it("solves the normal equations for any weights", () => {
    const point = fc.tuple(
      fc.double({ min: -50, max: 50, noNaN: true }),
      fc.double({ min: -50, max: 50, noNaN: true }),
      fc.double({ min: 0.01, max: 100, noNaN: true }),
    );
    fc.assert(
      fc.property(fc.array(point, { minLength: 3, maxLength: 20 }), (points) => {
        const [x, y, w] = [0, 1, 2].map((at) => points.map((p) => p[at]));
        fc.pre(Math.max(...x) - Math.min(...x) > 0.1);
        const fit = fitWeightedLine(x, y, w);
        const scale = w.reduce((sum, weight) => sum + weight, 0) * 2500 * (1 + Math.abs(fit.slope));
        const residuals = y.map((value, j) => w[j] * (value - fit.intercept - fit.slope * x[j]));
        expect(Math.abs(residuals.reduce((sum, r) => sum + r, 0))).toBeLessThan(1e-11 * scale);
        expect(Math.abs(residuals.reduce((sum, r, j) => sum + r * x[j], 0))).toBeLessThan(1e-9 * scale);
        expect(fit.covariance ** 2).toBeLessThanOrEqual((fit.interceptError * fit.slopeError) ** 2 * (1 + 1e-12));
      }),
    );
  });

  it("keeps its digits when x sits far from zero", () => {
    const x = [1, 2, 3, 4, 5].map((value) => value + 1e9);
    const fit = fitWeightedLine(x, [2, 4, 6, 8, 10], [1, 2, 3, 2, 1]);
    expect(fit.slope).toBe(2);
    expect(fit.chiSquare).toBeLessThan(1e-20);
  });

  it("gives errors that follow from the weights alone", () => {
    const fit = fitWeightedLine([0, 1, 2], [0, 5, 1], [4, 4, 4]);
    expect(fit.slopeError).toBeCloseTo(Math.sqrt(1 / 8), 14);
    expect(fit.interceptError).toBeCloseTo(Math.sqrt(1 / 12 + 1 / 8), 14);
    expect(fit.covariance).toBeCloseTo(-1 / 8, 14);
    expect(fitWeightedLineThroughOrigin([0, 1, 2], [0, 5, 1], [4, 4, 4]).slopeError).toBeCloseTo(1 / Math.sqrt(20), 14);
  });

  it("is NaN where no line is determined", () => {
    expect(fitWeightedLine([0.3, 0.3, 0.3], [1, 2, 3], [1, 1, 1]).slope).toBeNaN();
    expect(fitWeightedLine([], [], []).intercept).toBeNaN();
    expect(fitWeightedLine([1, 2], [1, 2], [1, 0]).slope).toBeNaN();
    expect(fitWeightedLineThroughOrigin([0], [1], [1]).slope).toBeNaN();
  });
});
