import { readFileSync } from "node:fs";
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import {
  bcaInterval,
  bcaLevel,
  clopperPearson,
  jackknifeAcceleration,
  mean,
  percentileInterval,
  standardDeviation,
} from "@/lib/science/stats/intervals";
import { createRandomStream } from "@/lib/science/stats/philox";
import { quantile } from "@/lib/science/stats/quantiles";
import { regularisedBeta } from "@/lib/science/stats/special-functions";

const checks = JSON.parse(readFileSync("tests/fixtures/checks/statistics.json", "utf8"));
const law = checks.law_school;
const spatial = checks.spatial_test_data;

function correlation(x: number[], y: number[]): number {
  const [meanX, meanY] = [mean(x), mean(y)];
  let [xx, yy, xy] = [0, 0, 0];
  for (let s = 0; s < x.length; s++) {
    xx += (x[s] - meanX) ** 2;
    yy += (y[s] - meanY) ** 2;
    xy += (x[s] - meanX) * (y[s] - meanY);
  }
  return xy / Math.sqrt(xx * yy);
}

function plugInVariance(values: number[]): number {
  const centre = mean(values);
  return mean(values.map((value) => (value - centre) ** 2));
}

function bootstrap(units: number, replicates: number, statistic: (chosen: number[]) => number): Float64Array {
  return Float64Array.from({ length: replicates }, (_, b) => {
    const stream = createRandomStream(2024, 1, 0, b);
    return statistic(Array.from({ length: units }, () => Math.floor(stream.nextUniform() * units)));
  });
}

const without = (values: number[], left: number) => values.filter((_, s) => s !== left);

describe("the law school data (Efron and Tibshirani 1993), against the enumeration of all its resamples", () => {
  const pick = (values: number[], chosen: number[]) => chosen.map((s) => values[s]);
  const estimate = correlation(law.lsat, law.gpa);
  const acceleration = jackknifeAcceleration(
    law.lsat.map((_: number, s: number) => correlation(without(law.lsat, s), without(law.gpa, s))),
  );
  const replicates = bootstrap(15, 100_000, (chosen) => correlation(pick(law.lsat, chosen), pick(law.gpa, chosen)));
  // A quantile at level p has Monte Carlo error √(p(1 − p)/B)/density; the density near the lower 95 % end is about
  // 0.15, so 1e5 replicates give 0.003 there. Four of those bound every end.
  const tolerance = 0.012;

  it("have the correlation and jackknife acceleration stated for them", () => {
    expect(estimate).toBeCloseTo(law.correlation, 12);
    expect(acceleration).toBeCloseTo(law.acceleration, 10);
  });

  it("give the exact levels at which BCa reads the replicates", () => {
    expect(bcaLevel(law.bias, law.acceleration, 0.05)).toBeCloseTo(law.bcaLevels90[0], 8);
    expect(bcaLevel(law.bias, law.acceleration, 0.95)).toBeCloseTo(law.bcaLevels90[1], 8);
    expect(bcaLevel(law.bias, law.acceleration, 0.025)).toBeCloseTo(law.bcaLevels95[0], 8);
    expect(bcaLevel(law.bias, law.acceleration, 0.975)).toBeCloseTo(law.bcaLevels95[1], 8);
  });

  it("give the ideal bootstrap's mean and error", () => {
    expect(Math.abs(mean(replicates) - law.idealMean)).toBeLessThan(4 * (law.idealError / Math.sqrt(1e5)));
    expect(Math.abs(standardDeviation(replicates) / law.idealError - 1)).toBeLessThan(0.01);
  });

  it.each([
    [0.9, law.percentile90, law.bca90],
    [0.95, law.percentile95, law.bca95],
  ])("give its percentile and BCa intervals at level %s", (level, percentile, bca) => {
    const gotPercentile = percentileInterval(replicates, level);
    const gotBca = bcaInterval(estimate, replicates, acceleration, level) ?? [Number.NaN, Number.NaN];
    for (const end of [0, 1]) {
      expect(Math.abs(gotPercentile[end] - percentile[end])).toBeLessThan(tolerance);
      expect(Math.abs(gotBca[end] - bca[end])).toBeLessThan(tolerance);
    }
    expect(percentile[0] - bca[0]).toBeGreaterThan(4 * tolerance);
  });
});

describe("the spatial test data (Efron and Tibshirani 1993, table 14.2), variance of 26 values", () => {
  const values: number[] = spatial.values;
  const estimate = plugInVariance(values);
  const acceleration = jackknifeAcceleration(values.map((_, s) => plugInVariance(without(values, s))));

  it("have the variance and acceleration stated for them", () => {
    expect(estimate).toBeCloseTo(spatial.variance, 6);
    expect(acceleration).toBeCloseTo(spatial.acceleration, 9);
  });

  it("give a 90 % BCa interval like that of two million replicates", () => {
    const replicates = bootstrap(26, 40_000, (chosen) => plugInVariance(chosen.map((s) => values[s])));
    const interval = bcaInterval(estimate, replicates, acceleration, 0.9) ?? [Number.NaN, Number.NaN];
    // The ends' Monte Carlo errors are about 0.5 and 0.8 at 40 000 replicates, those of z₀ included.
    expect(Math.abs(interval[0] - spatial.bca90[0])).toBeLessThan(2);
    expect(Math.abs(interval[1] - spatial.bca90[1])).toBeLessThan(3.2);
  });
});

describe("BCa intervals", () => {
  it("are the percentile interval when half the replicates lie below and nothing accelerates", () => {
    const replicates = Array.from({ length: 1000 }, (_, b) => b);
    const bca = bcaInterval(499.5, replicates, 0) ?? [Number.NaN, Number.NaN];
    const percentile = percentileInterval(replicates);
    expect(bca[0]).toBeCloseTo(percentile[0], 8);
    expect(bca[1]).toBeCloseTo(percentile[1], 8);
  });

  it("do not exist when all replicates lie on one side", () => {
    expect(bcaInterval(5, [6, 7, 8], 0)).toBeNull();
    expect(bcaInterval(9, [6, 7, 8], 0)).toBeNull();
    expect(bcaInterval(1, [1, 1, 1], 0)).toBeNull();
    expect(bcaInterval(1, [], 0)).toBeNull();
    expect(bcaInterval(1, [0, 2], 10)).toBeNull();
  });

  it("follow the data under shift and scale, and stay within the replicates", () => {
    const wholes = fc.array(fc.integer({ min: -100, max: 100 }), { minLength: 20, maxLength: 60 });
    fc.assert(
      fc.property(wholes, fc.double({ min: -0.1, max: 0.1, noNaN: true }), (values, acceleration) => {
        const estimate = Math.floor(quantile(values, 0.4)) + 0.5;
        const moved = values.map((value) => 2 * value + 8);
        const plain = bcaInterval(estimate, values, acceleration);
        fc.pre(plain !== null);
        if (plain === null) return;
        expect(plain[0]).toBeLessThanOrEqual(plain[1]);
        expect(plain[0]).toBeGreaterThanOrEqual(Math.min(...values));
        expect(plain[1]).toBeLessThanOrEqual(Math.max(...values));
        const after = bcaInterval(2 * estimate + 8, moved, acceleration) ?? [Number.NaN, Number.NaN];
        expect(after[0]).toBeCloseTo(2 * plain[0] + 8, 9);
        expect(after[1]).toBeCloseTo(2 * plain[1] + 8, 9);
      }),
    );
  });

  it("have no acceleration where leaving out any unit changes nothing", () => {
    expect(jackknifeAcceleration([2, 2, 2])).toBe(0);
  });
});

describe("Clopper–Pearson intervals", () => {
  it.each(checks.clopper_pearson as { k: number; n: number; interval: [number, number] }[])(
    "are $interval for $k of $n (tables in Newcombe 1998, and computed)",
    ({ k, n, interval }) => {
      const [low, high] = clopperPearson(k, n);
      expect(low).toBeCloseTo(interval[0], 12);
      expect(high).toBeCloseTo(interval[1], 12);
    },
  );

  it("leave exactly half the missing level in each tail, hold the share, and mirror", () => {
    fc.assert(
      fc.property(fc.integer({ min: 2, max: 3000 }), fc.double({ min: 0, max: 1, noNaN: true }), (n, share) => {
        const k = Math.round(share * n);
        const [low, high] = clopperPearson(k, n);
        expect(low).toBeLessThanOrEqual(k / n);
        expect(high).toBeGreaterThanOrEqual(k / n);
        if (k > 0) expect(regularisedBeta(low, k, n - k + 1)).toBeCloseTo(0.025, 10);
        if (k < n) expect(1 - regularisedBeta(high, k + 1, n - k)).toBeCloseTo(0.025, 10);
        const mirrored = clopperPearson(n - k, n);
        expect(mirrored[0]).toBeCloseTo(1 - high, 10);
        expect(mirrored[1]).toBeCloseTo(1 - low, 10);
      }),
    );
  });

  it("say nothing about no trials", () => {
    expect(clopperPearson(0, 0)).toEqual([0, 1]);
  });
});

describe("the standard deviation", () => {
  it("divides by n − 1 and keeps its digits far from zero", () => {
    expect(standardDeviation([1, 2, 3, 4])).toBeCloseTo(Math.sqrt(5 / 3), 15);
    expect(standardDeviation([1, 2, 3, 4].map((value) => value + 1e9))).toBeCloseTo(Math.sqrt(5 / 3), 12);
    expect(standardDeviation([3])).toBeNaN();
    expect(mean([])).toBeNaN();
  });
});
