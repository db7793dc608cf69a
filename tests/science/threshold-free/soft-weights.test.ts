import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { poissonErrorRates, advisePoissonThreshold } from "@/lib/science/detection/threshold";
import { countLawOf, fittedCountLaw, poissonCountLaw, type CountLaw } from "@/lib/science/threshold-free/count-laws";
import { softenCounts } from "@/lib/science/threshold-free/soft-spins";
import { softWeights, type SoftWeights } from "@/lib/science/threshold-free/soft-weights";
import { poissonDensity } from "@/lib/science/stats/gamma-functions";

const sum = (values: ArrayLike<number>) => Array.from(values).reduce((total, value) => total + value, 0);
const meanUnder = (shares: Float64Array, value: Float64Array) => sum(shares.map((share, n) => share * value[n]));

function weightsOf(law: CountLaw, brightIs: "up" | "down" = "up"): SoftWeights {
  const weights = softWeights(law, brightIs);
  if (weights === null) throw new Error("no weights");
  return weights;
}

function varianceOf(law: CountLaw, value: Float64Array): number {
  const mixed = law.bright.map((p, n) => law.brightWeight * p + (1 - law.brightWeight) * law.dark[n]);
  return meanUnder(mixed, value.map((v) => v * v)) - meanUnder(mixed, value) ** 2;
}

/** Two bins, as a threshold leaves: dark reads bright with ε_d, bright reads dark with ε_b. */
const binary = (falseBright: number, falseDark: number, brightWeight = 0.5): CountLaw => ({
  dark: Float64Array.of(1 - falseBright, falseBright),
  bright: Float64Array.of(falseDark, 1 - falseDark),
  brightWeight,
});

const separable = fc
  .record({ dark: fc.double({ min: 0, max: 5, noNaN: true }), gap: fc.double({ min: 2.5, max: 40, noNaN: true }), brightWeight: fc.double({ min: 0.01, max: 0.99, noNaN: true }) })
  .map(({ dark, gap, brightWeight }) => poissonCountLaw({ dark, bright: dark + gap, brightWeight }));

describe("soft spins", () => {
  it("average to +1 over the bright and −1 over the dark component, the other way round when bright is down", () => {
    fc.assert(
      fc.property(separable, (law) => {
        const { value } = weightsOf(law);
        expect(meanUnder(law.bright, value)).toBeCloseTo(1, 9);
        expect(meanUnder(law.dark, value)).toBeCloseTo(-1, 9);
        expect(Array.from(weightsOf(law, "down").value)).toEqual(Array.from(value, (v) => 0 - v));
      }),
    );
  });

  it("have no more variance than any other function of the counts with these averages", () => {
    fc.assert(
      fc.property(separable, fc.array(fc.double({ min: -1, max: 1, noNaN: true }), { minLength: 100, maxLength: 100 }), (law, draws) => {
        fc.pre(law.brightWeight >= 0.02 && law.brightWeight <= 0.98);
        const { value } = weightsOf(law);
        const other = value.map((v, n) => v + (draws[n] ?? 0));
        // Put the averages right again by two of the counts' own functions.
        const bent = restored(law, other);
        expect(meanUnder(law.bright, bent)).toBeCloseTo(1, 6);
        expect(varianceOf(law, bent)).toBeGreaterThanOrEqual(varianceOf(law, value) - 1e-9);
      }),
    );
  });

  it("have no more variance than a corrected threshold, which is one such function", () => {
    const law = poissonCountLaw({ dark: 2, bright: 8, brightWeight: 0.5 });
    const threshold = advisePoissonThreshold(2, 8);
    const { falseBright, falseDark } = poissonErrorRates(threshold, 2, 8);
    const corrected = law.dark.map((_, n) => ((n > threshold ? 1 : -1) - (falseBright - falseDark)) / (1 - falseBright - falseDark));
    expect(meanUnder(law.bright, corrected)).toBeCloseTo(1, 12);
    expect(varianceOf(law, weightsOf(law).value)).toBeLessThan(0.95 * varianceOf(law, corrected));
  });

  it("are the corrected readings (σ − (ε_d − ε_b))/F where the counts have two values only, whatever the prior", () => {
    for (const prior of [0.1, 0.5, 0.8]) {
      const { value } = weightsOf(binary(0.02, 0.07, prior));
      expect(value[0]).toBeCloseTo((-1 + 0.05) / 0.91, 12);
      expect(value[1]).toBeCloseTo((1 + 0.05) / 0.91, 12);
    }
  });

  it("are the spins themselves where the components do not overlap", () => {
    const apart = weightsOf({ dark: Float64Array.of(0.7, 0.3, 0, 0), bright: Float64Array.of(0, 0, 0.4, 0.6), brightWeight: 0.3 });
    expect(Array.from(apart.value)).toEqual([-1, -1, 1, 1].map((v) => expect.closeTo(v, 12)));
    expect(apart.retained).toBeCloseTo(1, 12);
  });

  it("keep F² of the information with symmetric errors and even chances, and are refused at F = 0.2 as a threshold is", () => {
    expect(weightsOf(binary(0.1, 0.1)).retained).toBeCloseTo(0.64, 12);
    expect(softWeights(binary(0.399, 0.399), "up")).not.toBeNull();
    expect(softWeights(binary(0.401, 0.401), "up")).toBeNull();
    expect(softWeights(poissonCountLaw({ dark: 3, bright: 3, brightWeight: 0.5 }), "up")).toBeNull();
  });

  it("are finite for a component that the run hardly shows, and still without bias", () => {
    const law = poissonCountLaw({ dark: 1, bright: 12, brightWeight: 1e-9 });
    const { value } = weightsOf(law);
    expect(value.every(Number.isFinite)).toBe(true);
    expect(meanUnder(law.bright, value)).toBeCloseTo(1, 9);
  });
});

/** Adds the multiples of the two components' likelihood ratios that give averages +1 and −1 again. */
function restored(law: CountLaw, value: Float64Array): Float64Array {
  const first = law.bright.map((p, n) => (p > law.dark[n] ? 1 : 0));
  const errorBright = 1 - meanUnder(law.bright, value);
  const errorDark = -1 - meanUnder(law.dark, value);
  const hit = meanUnder(law.bright, first);
  const missed = meanUnder(law.dark, first);
  const slope = (errorBright - errorDark) / (hit - missed);
  return value.map((v, n) => v + slope * first[n] + errorBright - slope * hit);
}

describe("a law of counts", () => {
  it("adds up to 1 over its bins", () => {
    fc.assert(
      fc.property(separable, ({ dark, bright }) => {
        expect(sum(dark)).toBeCloseTo(1, 10);
        expect(sum(bright)).toBeCloseTo(1, 10);
      }),
    );
  });

  it("has the leaks or the excess variance of the fitted components, and is Poisson without them", () => {
    const rates = { dark: 1, bright: 9, brightWeight: 0.5 };
    const over = (shares: Float64Array) => {
      const centre = sum(shares.map((share, n) => share * n));
      return { centre, variance: sum(shares.map((share, n) => share * (n - centre) ** 2)) };
    };
    const leaking = fittedCountLaw({ ...rates, leakDark: 0.01, leakBright: 0.002 });
    // One change at a random moment, with chance 0.01 · 8 at most, adds half the signal.
    expect(over(leaking.dark).centre).toBeCloseTo(1 + 8 * (1 - (1 - Math.exp(-0.08)) / 0.08), 8);
    expect(over(leaking.bright).centre).toBeLessThan(9);
    const noisy = fittedCountLaw({ ...rates, darkExcess: 0.05, brightExcess: 0.02 });
    expect(over(noisy.bright).centre).toBeCloseTo(9, 8);
    expect(over(noisy.bright).variance).toBeCloseTo(9 + 0.02 * 81, 6);
    for (const law of [leaking, noisy]) expect([sum(law.dark), sum(law.bright)]).toEqual([expect.closeTo(1, 12), expect.closeTo(1, 12)]);
    expect(fittedCountLaw(rates)).toEqual(poissonCountLaw(rates));
  });

  it("is the same from densities as from Poisson rates, with the rest in the last bin", () => {
    const rates = { dark: 2, bright: 8, brightWeight: 0.4 };
    const built = countLawOf((n) => poissonDensity(n, 2), (n) => poissonDensity(n, 8), 0.4, 10);
    const full = poissonCountLaw(rates);
    expect(Array.from(built.bright.subarray(0, 9))).toEqual(Array.from(full.bright.subarray(0, 9)));
    expect(built.bright[9]).toBeCloseTo(sum(full.bright.subarray(9)), 12);
    expect(() => countLawOf(() => 0.3, () => 0.1, 0.5, 10)).toThrow("add up to");
  });
});

describe("softened counts", () => {
  it("lie site by site, with counts beyond the last bin in it", () => {
    const weights = [Float64Array.of(-1, 0, 1), Float64Array.of(-2, 2)];
    const { values } = softenCounts(Uint16Array.of(0, 1, 7, 0, 1, 65535), 3, 2, weights);
    expect(Array.from(values)).toEqual([-1, 1, 0, 2, -2, 2]);
    expect(() => softenCounts(Uint16Array.of(0), 1, 2, weights)).toThrow("1 × 2");
  });
});
