import { readFileSync } from "node:fs";
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { matchBeta, mixtureErrorRates } from "@/lib/science/detection/mixture-error-rates";
import { fitPoissonMixture, type TwoComponents } from "@/lib/science/detection/poisson-mixture";
import { poissonErrorRates } from "@/lib/science/detection/threshold";
import { createRandomStream } from "@/lib/science/stats/philox";
import { drawPoisson } from "@/lib/science/stats/random-variates";

const histograms: number[][] = JSON.parse(readFileSync("tests/fixtures/detection/run-histograms.json", "utf8")).runs[
  "ising-chain-10"
].histograms;

function fitted(frequencies: number[]): TwoComponents {
  const fit = fitPoissonMixture(frequencies);
  if (fit.kind !== "two-components") throw new Error(fit.reason);
  return fit;
}

function simulated(seed: number, shots: number): number[] {
  const stream = createRandomStream(seed, 3, 1);
  const frequencies = new Array<number>(60).fill(0);
  for (let s = 0; s < shots; s++) frequencies[drawPoisson(stream, stream.nextUniform() < 0.3 ? 9 : 1.1)] += 1;
  return frequencies;
}

describe("error rates of a threshold under a mixture", () => {
  it("are the Poisson tails of the fitted rates, inside their intervals", () => {
    for (const frequencies of histograms) {
      const fit = fitted(frequencies);
      for (const threshold of [0.5, 3.5, 4, 8.5]) {
        const rates = mixtureErrorRates(fit, threshold);
        expect(rates).toMatchObject(poissonErrorRates(threshold, fit.dark, fit.bright));
        expect(rates.falseBrightInterval[0]).toBeLessThan(rates.falseBright);
        expect(rates.falseBrightInterval[1]).toBeGreaterThan(rates.falseBright);
        expect(rates.falseDarkInterval[0]).toBeLessThan(rates.falseDark);
        expect(rates.falseDarkInterval[1]).toBeGreaterThan(rates.falseDark);
      }
    }
  });

  it("have intervals that hold the true rates in about 95 of 100 simulated sites", () => {
    const truth = poissonErrorRates(3.5, 1.1, 9);
    let [holdsBright, holdsDark] = [0, 0];
    const repeats = 400;
    for (let seed = 0; seed < repeats; seed++) {
      const { falseBrightInterval, falseDarkInterval } = mixtureErrorRates(fitted(simulated(seed, 2000)), 3.5);
      if (falseBrightInterval[0] <= truth.falseBright && truth.falseBright <= falseBrightInterval[1]) holdsBright += 1;
      if (falseDarkInterval[0] <= truth.falseDark && truth.falseDark <= falseDarkInterval[1]) holdsDark += 1;
    }
    // The binomial error of a 95 % share in 400 repeats is 1.1 %; four of those.
    expect(Math.abs(holdsBright / repeats - 0.95)).toBeLessThan(0.044);
    expect(Math.abs(holdsDark / repeats - 0.95)).toBeLessThan(0.044);
  });

  it("carry evidence whose Beta law has the spread seen over simulated sites", () => {
    const fits = Array.from({ length: 400 }, (_, seed) => mixtureErrorRates(fitted(simulated(seed, 2000)), 3.5));
    const rates = fits.map((fit) => fit.falseBright);
    const mean = rates.reduce((sum, rate) => sum + rate, 0) / rates.length;
    const spread = Math.sqrt(rates.reduce((sum, rate) => sum + (rate - mean) ** 2, 0) / (rates.length - 1));
    const { errors, shots } = fits[0].evidence.dark;
    const [a, b] = [errors + 0.5, shots - errors + 0.5];
    const stated = Math.sqrt((a * b) / ((a + b) ** 2 * (a + b + 1)));
    expect(Math.abs(stated / spread - 1)).toBeLessThan(0.2);
  });

  it("of dark shots that never count are 0, with an upper end from the shots seen", () => {
    const fit: TwoComponents = { ...fitted(histograms[0]), dark: 0, darkError: 0, shots: 1000, brightWeight: 0.4 };
    const rates = mixtureErrorRates(fit, 0.5);
    expect(rates.falseBright).toBe(0);
    expect(rates.falseBrightInterval[0]).toBe(0);
    expect(rates.falseBrightInterval[1]).toBeCloseTo(-Math.log(0.025) / 600, 4);
    expect(rates.evidence.dark).toEqual({ errors: 0, shots: 600 });
  });

  it("below zero are 1 and 0 without doubt", () => {
    const rates = mixtureErrorRates(fitted(histograms[0]), -0.5);
    expect(rates).toMatchObject({
      falseBright: 1,
      falseDark: 0,
      falseBrightInterval: [1, 1],
      falseDarkInterval: [0, 0],
    });
  });
});

describe("a matched Beta law", () => {
  it("has the mean and standard error asked for, while they allow a count of errors", () => {
    const mean = fc.double({ min: 1e-6, max: 0.5, noNaN: true });
    fc.assert(
      fc.property(mean, fc.double({ min: 0.01, max: 1, noNaN: true }), (m, relative) => {
        const { errors, shots } = matchBeta(m, m * relative, 1000);
        const [a, b] = [errors + 0.5, shots - errors + 0.5];
        expect(a / (a + b)).toBeCloseTo(m, 12);
        expect(errors).toBeGreaterThanOrEqual(0);
        if (errors === 0) return;
        const variance = (a * b) / ((a + b) ** 2 * (a + b + 1));
        expect(Math.sqrt(variance) / (m * relative)).toBeCloseTo(1, 9);
      }),
    );
  });
});
