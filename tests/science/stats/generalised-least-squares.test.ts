import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { fitGeneralisedLine, generalisedChiSquare } from "@/lib/science/stats/generalised-least-squares";
import { fitWeightedLine, fitWeightedLineThroughOrigin } from "@/lib/science/stats/least-squares";
import { chiSquareSurvival } from "@/lib/science/stats/special-functions";

const DISTANCE = [1, 2, 3, 4];
const TIME = [1.1, 1.9, 3.2, 3.9];
const COVARIANCE = Float64Array.from({ length: 16 }, (_, at) => 0.04 * 0.5 ** Math.abs(Math.floor(at / 4) - (at % 4)));

// Values computed and cross-checked by a second route: checks, section 10 (information_criteria_and_gls.gls).
describe("generalised least squares", () => {
  it("gives the published line, its covariance, χ² and p", () => {
    const line = fitGeneralisedLine(DISTANCE, TIME, COVARIANCE, false);
    expect(line.intercept).toBeCloseTo(0.15376344086021687, 13);
    expect(line.slope).toBeCloseTo(0.9451612903225803, 13);
    expect(line.interceptError ** 2).toBeCloseTo(0.06838709677419356, 13);
    expect(line.slopeError ** 2).toBeCloseTo(0.007741935483870968, 13);
    expect(line.covariance).toBeCloseTo(-0.01935483870967742, 13);
    expect(line.chiSquare).toBeCloseTo(4.014336917562731, 12);
    expect(chiSquareSurvival(line.chiSquare, 2)).toBeCloseTo(0.13436860676681173, 12);
  });

  it("gives the published line through the origin", () => {
    const line = fitGeneralisedLine(DISTANCE, TIME, COVARIANCE, true);
    expect(line.intercept).toBe(0);
    expect(line.slope).toBeCloseTo(0.9886792452830189, 13);
    expect(line.slopeError).toBeCloseTo(0.0475830951, 10);
    expect(line.chiSquare).toBeCloseTo(4.360062893081774, 12);
    expect(chiSquareSurvival(line.chiSquare, 3)).toBeCloseTo(0.2251171762, 10);
  });

  it("gives the published power law in logarithms", () => {
    const scaled = COVARIANCE.map((value, at) => value / (TIME[Math.floor(at / 4)] * TIME[at % 4]));
    const line = fitGeneralisedLine(DISTANCE.map(Math.log), TIME.map(Math.log), scaled, false);
    expect(line.slope).toBeCloseTo(0.90824606, 8);
    expect(line.slopeError).toBeCloseTo(0.11808766, 8);
  });

  it("is weighted least squares for independent errors", () => {
    const value = fc.double({ min: -50, max: 50, noNaN: true });
    const error = fc.double({ min: 0.1, max: 5, noNaN: true });
    fc.assert(
      fc.property(fc.array(fc.tuple(value, error), { minLength: 3, maxLength: 12 }), (points) => {
        const x = points.map((_, n) => n + 1);
        const y = points.map(([time]) => time);
        const weights = points.map(([, sigma]) => 1 / sigma ** 2);
        const size = points.length;
        const diagonal = new Float64Array(size * size);
        points.forEach(([, sigma], n) => (diagonal[n * size + n] = sigma ** 2));
        const generalised = fitGeneralisedLine(x, y, diagonal, false);
        const weighted = fitWeightedLine(x, y, weights);
        expect(generalised.slope).toBeCloseTo(weighted.slope, 7);
        expect(generalised.intercept).toBeCloseTo(weighted.intercept, 7);
        expect(generalised.slopeError).toBeCloseTo(weighted.slopeError, 7);
        expect(fitGeneralisedLine(x, y, diagonal, true).slope).toBeCloseTo(fitWeightedLineThroughOrigin(x, y, weights).slope, 7);
        const residuals = y.map((time, n) => time - weighted.intercept - weighted.slope * x[n]);
        expect(Math.abs(generalisedChiSquare(residuals, diagonal) - weighted.chiSquare)).toBeLessThan(1e-7 * (1 + weighted.chiSquare));
      }),
    );
  });

  it("has no line for a covariance that is none", () => {
    expect(fitGeneralisedLine([1, 2], [1, 2], Float64Array.of(1, 2, 2, 1), false).slope).toBeNaN();
  });
});
