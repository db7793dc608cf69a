import { readFileSync } from "node:fs";
import { beforeAll, describe, expect, it } from "vitest";
import { bcaLevel, jackknifeAcceleration, standardDeviation } from "@/lib/science/stats/intervals";
import { normalQuantile } from "@/lib/science/stats/normal-quantile";
import { publishedChecks } from "./published-checks";

// Efron and Tibshirani (1993), An Introduction to the Bootstrap, ch. 14: fifteen law schools.
const law = JSON.parse(readFileSync("tests/fixtures/checks/statistics.json", "utf8")).law_school;
const published = publishedChecks().lawSchool;
const schools = 15;
const BINS = 2_000_000;

function correlationOf(x: number, y: number, xx: number, yy: number, xy: number): number {
  return (schools * xy - x * y) / Math.sqrt((schools * xx - x * x) * (schools * yy - y * y));
}

function leaveOneOut(): number[] {
  const kept = (left: number) => Array.from({ length: schools }, (_, s) => s).filter((s) => s !== left);
  return Array.from({ length: schools }, (_, left) => {
    const of = (f: (x: number, y: number) => number) => kept(left).reduce((sum, s) => sum + f(law.lsat[s], law.gpa[s]), 0) / 14;
    const [x, y] = [of((a) => a), of((_, b) => b)];
    return (of((a, b) => a * b) - x * y) / Math.sqrt((of((a) => a * a) - x * x) * (of((_, b) => b * b) - y * y));
  });
}

/** The law of r over all 77 558 760 different resamples, each with its multinomial chance, in bins of 1e-6. */
interface IdealBootstrap {
  histogram: Float64Array;
  resamples: number;
  mean: number;
  deviation: number;
  shareBelow: number;
}

function enumerate(estimate: number): IdealBootstrap {
  const histogram = new Float64Array(BINS);
  const inverseFactorial = Float64Array.from({ length: schools + 1 }, () => 1);
  for (let n = 2; n <= schools; n++) inverseFactorial[n] = inverseFactorial[n - 1] / n;
  // Centred, so that no digits are lost.
  const x = Float64Array.from(law.lsat as number[], (value) => value - 600);
  const y = Float64Array.from(law.gpa as number[], (value) => value - 3.1);
  const total = { resamples: 0, chance: 0, mean: 0, square: 0, below: 0 };
  const scale = 1 / (inverseFactorial[schools] * schools ** schools);
  const visit = (s: number, left: number, weight: number, sx: number, sy: number, sxx: number, syy: number, sxy: number): void => {
    const last = s === schools - 1;
    for (let n = last ? left : 0; n <= left; n++) {
      const [dx, dy] = [n * x[s], n * y[s]];
      const chance = weight * inverseFactorial[n];
      if (!last && n < left) {
        visit(s + 1, left - n, chance, sx + dx, sy + dy, sxx + dx * x[s], syy + dy * y[s], sxy + dx * y[s]);
        continue;
      }
      total.resamples += 1;
      // One school alone, fifteen times over, has no correlation.
      if (n === schools) continue;
      const r = correlationOf(sx + dx, sy + dy, sxx + dx * x[s], syy + dy * y[s], sxy + dx * y[s]);
      total.chance += chance;
      total.mean += chance * r;
      total.square += chance * r * r;
      if (r < estimate - 1e-12) total.below += chance;
      histogram[Math.min(BINS - 1, Math.floor(((r + 1) / 2) * BINS))] += chance;
    }
  };
  visit(0, schools, scale, 0, 0, 0, 0, 0);
  const mean = total.mean / total.chance;
  return { histogram, resamples: total.resamples, mean, deviation: Math.sqrt(total.square / total.chance - mean * mean), shareBelow: total.below };
}

function quantileOf({ histogram }: IdealBootstrap, p: number): number {
  let sum = 0;
  let bin = 0;
  while (bin < BINS && sum + histogram[bin] < p) sum += histogram[bin++];
  return -1 + (2 * (bin + 0.5)) / BINS;
}

describe("the ideal bootstrap of the law school data, over all its resamples", () => {
  let ideal: IdealBootstrap;
  const estimate: number = law.correlation;
  const acceleration = jackknifeAcceleration(leaveOneOut());
  beforeAll(() => {
    ideal = enumerate(estimate);
  }, 120_000);

  it("counts 77 558 760 resamples with the published mean, error and z₀", () => {
    expect(ideal.resamples).toBe(77_558_760);
    expect(ideal.mean).toBeCloseTo(law.idealMean, 9);
    expect(ideal.deviation).toBeCloseTo(law.idealError, 9);
    expect(normalQuantile(ideal.shareBelow)).toBeCloseTo(law.bias, 8);
  });

  it("has the published acceleration and jackknife error", () => {
    expect(acceleration).toBeCloseTo(law.acceleration, 9);
    expect((standardDeviation(leaveOneOut()) * 14) / Math.sqrt(15)).toBeCloseTo(published.jackknifeError, 9);
  });

  it.each([
    [0.9, law.percentile90, law.bca90, published.biasCorrected90, published.basic90],
    [0.95, law.percentile95, law.bca95, published.biasCorrected95, published.basic95],
  ])("has the published percentile, BCa, bias-corrected and basic ends at level %s", (level, percentile, bca, biasCorrected, basic) => {
    const z0 = normalQuantile(ideal.shareBelow);
    const tails = [(1 - level) / 2, (1 + level) / 2];
    tails.forEach((p, end) => {
      const plain = quantileOf(ideal, p);
      expect(Math.abs(plain - percentile[end])).toBeLessThan(2e-6);
      expect(Math.abs(2 * estimate - quantileOf(ideal, 1 - p) - basic[end])).toBeLessThan(2e-6);
      expect(Math.abs(quantileOf(ideal, bcaLevel(z0, acceleration, p) ?? NaN) - bca[end])).toBeLessThan(2e-6);
      expect(Math.abs(quantileOf(ideal, bcaLevel(z0, 0, p) ?? NaN) - biasCorrected[end])).toBeLessThan(2e-6);
    });
  });
});
