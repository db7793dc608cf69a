import { readFileSync } from "node:fs";
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { tallyCounts } from "@/lib/science/detection/count-tally";
import { fitPoissonMixture, type OneComponent, type TwoComponents } from "@/lib/science/detection/poisson-mixture";
import {
  mixtureDerivatives,
  mixtureLogLikelihood,
  singleLogLikelihood,
  stepMixtureByEm,
  type MixtureParameters,
} from "@/lib/science/detection/poisson-mixture-likelihood";
import { advisePoissonThreshold, poissonErrorRates } from "@/lib/science/detection/threshold";
import { createRandomStream } from "@/lib/science/stats/philox";
import { drawPoisson } from "@/lib/science/stats/random-variates";

interface ExpectedSite extends MixtureParameters {
  threshold: number;
  falseBright: number;
  falseDark: number;
}
interface RunHistograms {
  histograms: number[][];
  mixture: ExpectedSite[];
}

/** Death notices of 1910 to 1912, a much used example (Hasselblad 1969); 40-digit roots of the score equations. */
const example = JSON.parse(readFileSync("tests/fixtures/checks/statistics.json", "utf8")).poisson_mixture;
const runs: Record<string, RunHistograms> = JSON.parse(
  readFileSync("tests/fixtures/detection/run-histograms.json", "utf8"),
).runs;
const sites = Object.entries(runs).flatMap(([run, { histograms, mixture }]) =>
  mixture.map((expected, site) => ({ run, site, frequencies: histograms[site], expected })),
);

function twoComponents(fit: TwoComponents | OneComponent): TwoComponents {
  if (fit.kind !== "two-components") throw new Error(`one component: ${fit.reason}`);
  return fit;
}

function simulate(seed: number, shots: number, { dark, bright, brightWeight }: MixtureParameters): number[] {
  const stream = createRandomStream(seed, 3, 0);
  const frequencies: number[] = [];
  for (let s = 0; s < shots; s++) {
    const n = drawPoisson(stream, stream.nextUniform() < brightWeight ? bright : dark);
    while (frequencies.length <= n) frequencies.push(0);
    frequencies[n] += 1;
  }
  return frequencies;
}

describe("the maximum-likelihood mixture of the published example", () => {
  const fit = twoComponents(fitPoissonMixture(example.frequencies));

  it("has the parameters of the exact roots to 1e-9, where plain EM needs thousands of steps", () => {
    expect(fit.dark / example.dark).toBeCloseTo(1, 9);
    expect(fit.bright / example.bright).toBeCloseTo(1, 9);
    expect(fit.brightWeight / example.brightWeight).toBeCloseTo(1, 9);
    expect(fit.iterations).toBeLessThan(100);
  });

  it("has their log likelihood, and that of one Poisson law beside it", () => {
    expect(fit.logLikelihood).toBeCloseTo(example.logLikelihood, 9);
    expect(singleLogLikelihood(tallyCounts(example.frequencies))).toBeCloseTo(example.singleLogLikelihood, 9);
    expect(fit.gain).toBeCloseTo(example.logLikelihood - example.singleLogLikelihood, 8);
  });

  it("has the standard errors of the observed information", () => {
    expect(fit.brightWeightError).toBeCloseTo(example.standardErrors.brightWeight, 4);
    expect(fit.darkError).toBeCloseTo(example.standardErrors.dark, 4);
    expect(fit.brightError).toBeCloseTo(example.standardErrors.bright, 4);
  });

  it("takes the published first EM step", () => {
    const [darkWeight, dark, bright] = example.firstStep.start;
    const step = stepMixtureByEm(tallyCounts(example.frequencies), { dark, bright, brightWeight: 1 - darkWeight });
    expect(1 - step.brightWeight).toBeCloseTo(example.firstStep.after[0], 10);
    expect(step.dark).toBeCloseTo(example.firstStep.after[1], 10);
    expect(step.bright).toBeCloseTo(example.firstStep.after[2], 10);
  });
});

describe("mixtures of the simulated runs, against an outside program", () => {
  it.each(sites)("$run site $site agrees to 1e-5, with its threshold and error rates", ({ frequencies, expected }) => {
    const fit = twoComponents(fitPoissonMixture(frequencies));
    const threshold = advisePoissonThreshold(fit.dark, fit.bright);
    const rates = poissonErrorRates(threshold, fit.dark, fit.bright);
    expect(threshold).toBe(expected.threshold);
    for (const [value, truth] of [
      [fit.dark, expected.dark],
      [fit.bright, expected.bright],
      [fit.brightWeight, expected.brightWeight],
      [rates.falseBright, expected.falseBright],
      [rates.falseDark, expected.falseDark],
    ]) {
      expect(Math.abs(value / truth - 1)).toBeLessThan(1e-5);
    }
  });

  it("stand at a maximum: no gradient is left", () => {
    for (const { frequencies } of sites) {
      const tally = tallyCounts(frequencies);
      const { gradient } = mixtureDerivatives(tally, twoComponents(fitPoissonMixture(frequencies)));
      for (const slope of gradient) expect(Math.abs(slope)).toBeLessThan(1e-8 * tally.shots);
    }
  });
});

const parameters = fc.record({
  dark: fc.double({ min: 0.05, max: 8, noNaN: true }),
  bright: fc.double({ min: 0.05, max: 40, noNaN: true }),
  brightWeight: fc.double({ min: 0.02, max: 0.98, noNaN: true }),
});
const histogram = fc
  .array(fc.nat(200), { minLength: 3, maxLength: 30 })
  .filter((frequencies) => frequencies.filter((f) => f > 0).length > 1);

describe("the mixture likelihood", () => {
  it("never falls in an EM step", () => {
    fc.assert(
      fc.property(histogram, parameters, (frequencies, start) => {
        const tally = tallyCounts(frequencies);
        let current = start;
        let before = mixtureLogLikelihood(tally, current);
        for (let step = 0; step < 20; step++) {
          current = stepMixtureByEm(tally, current);
          const after = mixtureLogLikelihood(tally, current);
          expect(after).toBeGreaterThanOrEqual(before - 1e-12 * Math.abs(before));
          before = after;
        }
      }),
    );
  });

  it("has the derivatives that differences give", () => {
    fc.assert(
      fc.property(histogram, parameters, (frequencies, at) => {
        const tally = tallyCounts(frequencies);
        const moved = (which: number, step: number): MixtureParameters => {
          const odds = (at.brightWeight / (1 - at.brightWeight)) * Math.exp(which === 2 ? step : 0);
          return {
            dark: at.dark * Math.exp(which === 0 ? step : 0),
            bright: at.bright * Math.exp(which === 1 ? step : 0),
            brightWeight: odds / (1 + odds),
          };
        };
        const h = 1e-5;
        const { gradient, information } = mixtureDerivatives(tally, at);
        const scale = 1 + tally.shots * (1 + tally.mean + at.bright + at.dark) ** 2;
        for (const p of [0, 1, 2]) {
          const up = moved(p, h);
          const down = moved(p, -h);
          const slope = (mixtureLogLikelihood(tally, up) - mixtureLogLikelihood(tally, down)) / (2 * h);
          expect(Math.abs(slope - gradient[p]) / scale).toBeLessThan(1e-6);
          const [gradientUp, gradientDown] = [up, down].map((q) => mixtureDerivatives(tally, q).gradient);
          for (const q of [0, 1, 2]) {
            const curvature = (gradientUp[q] - gradientDown[q]) / (2 * h);
            expect(Math.abs(curvature + information[p * 3 + q]) / scale).toBeLessThan(1e-6);
          }
        }
      }),
    );
  });

  it("is highest at the fit, whatever other parameters are tried, and the labels are in order", () => {
    fc.assert(
      fc.property(histogram, parameters, (frequencies, other) => {
        const fit = fitPoissonMixture(frequencies);
        if (fit.kind === "one-component") return;
        expect(fit.dark).toBeLessThan(fit.bright);
        expect(fit.brightWeight > 0 && fit.brightWeight < 1).toBe(true);
        const tally = tallyCounts(frequencies);
        let climbed = other;
        for (let step = 0; step < 300; step++) climbed = stepMixtureByEm(tally, climbed);
        expect(mixtureLogLikelihood(tally, climbed)).toBeLessThanOrEqual(
          fit.logLikelihood + 1e-9 * Math.abs(fit.logLikelihood),
        );
      }),
      { numRuns: 200 },
    );
  });

  it("keeps its parameters when every shot is taken three times, and its errors shrink by √3", () => {
    const { frequencies } = sites[0];
    const once = twoComponents(fitPoissonMixture(frequencies));
    const thrice = twoComponents(fitPoissonMixture(frequencies.map((f) => 3 * f)));
    expect(thrice.dark).toBeCloseTo(once.dark, 10);
    expect(thrice.bright).toBeCloseTo(once.bright, 10);
    expect(thrice.brightWeight).toBeCloseTo(once.brightWeight, 10);
    expect(once.darkError / thrice.darkError).toBeCloseTo(Math.sqrt(3), 8);
  });
});

describe("simulated sites", () => {
  it("are recovered within their stated errors", () => {
    const truth = { dark: 0.9, bright: 9, brightWeight: 0.2 };
    const pulls = Array.from({ length: 60 }, (_, seed) => {
      const fit = twoComponents(fitPoissonMixture(simulate(seed, 3000, truth)));
      return [
        (fit.dark - truth.dark) / fit.darkError,
        (fit.bright - truth.bright) / fit.brightError,
        (fit.brightWeight - truth.brightWeight) / fit.brightWeightError,
      ];
    });
    for (const p of [0, 1, 2]) {
      const square = pulls.reduce((sum, pull) => sum + pull[p] ** 2, 0) / pulls.length;
      // Mean of 60 squared normals: 1 ± 0.18; four of those.
      expect(Math.abs(square - 1)).toBeLessThan(0.74);
    }
  });

  it("with dark shots that never count end at a dark rate of exactly 0", () => {
    const fit = twoComponents(fitPoissonMixture(simulate(5, 4000, { dark: 0, bright: 11, brightWeight: 0.4 })));
    expect(fit.dark).toBe(0);
    expect(fit.darkError).toBe(0);
    expect(Math.abs(fit.bright - 11)).toBeLessThan(4 * fit.brightError);
    expect(Math.abs(fit.brightWeight - 0.4)).toBeLessThan(4 * fit.brightWeightError);
  });

  it.each([0.02, 0.5, 0.98])("are found when a share of %s is bright", (brightWeight) => {
    const fit = twoComponents(fitPoissonMixture(simulate(9, 20_000, { dark: 1.2, bright: 14, brightWeight })));
    expect(Math.abs(fit.dark - 1.2)).toBeLessThan(5 * fit.darkError);
    expect(Math.abs(fit.bright - 14)).toBeLessThan(5 * fit.brightError);
  });

  it("of one Poisson law are told to have one component, at least 99 times in 100", () => {
    const kinds = Array.from({ length: 300 }, (_, seed) => {
      const rate = [0.05, 0.8, 3, 12][seed % 4];
      return fitPoissonMixture(simulate(seed, 2000, { dark: rate, bright: rate, brightWeight: 0.5 })).kind;
    });
    expect(kinds.filter((kind) => kind === "two-components").length).toBeLessThanOrEqual(3);
  });
});

describe("a site without two components", () => {
  it.each([
    [[], "no-shots"],
    [[0, 0], "no-shots"],
    [[500], "all-zero"],
    [[0, 0, 0, 40], "all-equal"],
    [[5, 5], "one-component"],
    [[0, 1, 100, 1], "one-component"],
  ])("with frequencies %j says %s and invents no bright rate", (frequencies, reason) => {
    const fit = fitPoissonMixture(frequencies);
    expect(fit).toMatchObject({ kind: "one-component", reason });
    expect(fit).not.toHaveProperty("bright");
  });
});
