import { describe, expect, it } from "vitest";
import { chooseCountModel } from "@/lib/science/detection/choose-count-model";
import { detect } from "@/lib/science/detection/detect";
import { fitPoissonMixture } from "@/lib/science/detection/poisson-mixture";
import { createRandomStream, type RandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { drawGamma, drawPoisson } from "@/lib/science/stats/random-variates";

const SHOTS = 30_000;

type DrawCount = (stream: RandomStream, bright: boolean) => number;

/** Counts of a shot that changes state at a random moment, at most once, from the physics and not from the density. */
function leaking(dark: number, bright: number, leakDark: number, leakBright: number): DrawCount {
  return (stream, isBright) => {
    const rate = (isBright ? leakBright : leakDark) * (bright - dark);
    const moment = -Math.log(1 - stream.nextUniform()) / rate;
    const [before, after] = isBright ? [bright, dark] : [dark, bright];
    return drawPoisson(stream, moment >= 1 ? before : moment * before + (1 - moment) * after);
  };
}

/** Poisson counts whose mean varies with a gamma law. */
function varying(dark: number, bright: number, excess: number): DrawCount {
  return (stream, isBright) => drawPoisson(stream, (isBright ? bright : dark) * excess * drawGamma(stream, 1 / excess));
}

const steady: DrawCount = (stream, isBright) => drawPoisson(stream, isBright ? 12 : 0.8);

function histogramOf(draw: DrawCount, seed: number, shots = SHOTS): number[] {
  const stream = createRandomStream(seed, RANDOM_PURPOSES.simulation, 12);
  const frequencies: number[] = [];
  for (let s = 0; s < shots; s++) {
    const n = draw(stream, stream.nextUniform() < 0.4);
    while (frequencies.length <= n) frequencies.push(0);
    frequencies[n] += 1;
  }
  return frequencies;
}

function choose(histograms: number[][], asked: Parameters<typeof chooseCountModel>[2] = "auto") {
  return chooseCountModel(histograms, histograms.map(fitPoissonMixture), asked);
}

function fitOf(histogram: number[], name: "leakage" | "negative-binomial") {
  const [fit] = choose([histogram], name).fits;
  if (fit?.kind !== "two-components") throw new Error("no two components");
  return fit;
}

const SEEDS = Array.from({ length: 20 }, (_, seed) => seed);

describe("the choice by BIC", () => {
  it.each([
    { name: "leakage", draw: leaking(0.5, 14, 0.005, 0.005) },
    { name: "negative-binomial", draw: varying(2, 30, 0.04) },
    { name: "poisson", draw: steady },
  ])("takes $name where the counts follow it, in at least 19 of 20 cases", ({ name, draw }) => {
    const right = SEEDS.filter((seed) => choose([histogramOf(draw, seed)]).model.name === name);
    expect(right.length).toBeGreaterThanOrEqual(19);
  });

  it("gives its reason with the differences, and says when it was not asked", () => {
    const histograms = [histogramOf(steady, 1)];
    expect(choose(histograms).model.reason).toMatch(/^Two Poisson components, since no richer model lowers BIC by more than 10\. BIC against .* 1 site: Poisson components with leakage \+\d+/);
    const byHand = choose(histograms, "leakage").model;
    expect(byHand.chosen).toBe("by-hand");
    expect(byHand.reason).toMatch(/^Taken by hand: Poisson components with leakage\./);
  });
});

describe("a fit of Poisson counts with leakage", () => {
  it("finds the rates, the leaks and the error rates that a threshold really has", () => {
    const histogram = histogramOf(leaking(0.5, 14, 0.005, 0.005), 7, 200_000);
    const { components, advised, ratesAt } = fitOf(histogram, "leakage");
    expect(Math.abs(components.dark - 0.5)).toBeLessThan(4 * components.darkError);
    expect(Math.abs(components.bright - 14)).toBeLessThan(4 * components.brightError);
    expect(Math.abs((components.leakDark ?? NaN) / 0.005 - 1)).toBeLessThan(0.08);
    expect(components.leakBright).toBe(components.leakDark);
    const stream = createRandomStream(5, RANDOM_PURPOSES.simulation, 13);
    const draw = leaking(0.5, 14, 0.005, 0.005);
    const shareWhere = (isBright: boolean, read: (n: number) => boolean) => Array.from({ length: 100_000 }, () => draw(stream, isBright)).filter(read).length / 100_000;
    const rates = ratesAt(advised);
    // Within twice the 95 % interval's reach, about four standard errors, on the logarithmic scale.
    const apart = (found: number, truth: number, [low, high]: [number, number]) => Math.abs(Math.log(found / truth)) / Math.log(high / low);
    expect(apart(rates.falseBright, shareWhere(false, (n) => n > advised), rates.falseBrightInterval)).toBeLessThan(1);
    expect(apart(rates.falseDark, shareWhere(true, (n) => n <= advised), rates.falseDarkInterval)).toBeLessThan(1);
    expect(rates.falseBrightInterval[1] / rates.falseBrightInterval[0]).toBeLessThan(2);
  });

  // Densities of shots that leave either state are nearly the same between the peaks: only their weighted sum can be told.
  it("finds how many shots leak when one state leaks more, not which", () => {
    const { components } = fitOf(histogramOf(leaking(0.5, 14, 0.008, 0.002), 4, 200_000), "leakage");
    expect(Math.abs((components.leakDark ?? NaN) / (0.6 * 0.008 + 0.4 * 0.002) - 1)).toBeLessThan(0.12);
  });

  // The Poisson mixture takes leaking shots for none: its ε_d is too low (definitions, section 2).
  it("does not read ε_d too low, as Poisson components do", () => {
    const histogram = histogramOf(leaking(0.5, 14, 0.005, 0.005), 7, 200_000);
    const [poisson] = choose([histogram], "poisson").fits;
    if (poisson?.kind !== "two-components") throw new Error("no two components");
    expect(poisson.ratesAt(3.5).falseBright).toBeLessThan(0.5 * fitOf(histogram, "leakage").ratesAt(3.5).falseBright);
  });
});

describe("a fit of negative binomial counts", () => {
  it("finds means and excess variances", () => {
    const { components } = fitOf(histogramOf(varying(2, 30, 0.04), 3, 100_000), "negative-binomial");
    expect(Math.abs(components.dark - 2)).toBeLessThan(4 * components.darkError);
    expect(Math.abs(components.bright - 30)).toBeLessThan(4 * components.brightError);
    expect(components.brightExcess).toBeGreaterThan(0.036);
    expect(components.brightExcess).toBeLessThan(0.044);
  });
});

describe("a common threshold", () => {
  it("is one for all sites, with a mean error no larger than any other's", () => {
    const histograms = [steady, leaking(0.3, 18, 1e-4, 1e-4), leaking(1.2, 9, 1e-4, 1e-4)].map((draw, seed) => ({ firstBin: 0, frequencies: Uint32Array.from(histogramOf(draw, seed)) }));
    const input = { method: "mixture", model: "poisson", thresholds: null, histograms, countKind: "whole", calibration: null } as const;
    const common = detect({ ...input, thresholdScope: "common" });
    const own = detect({ ...input, thresholdScope: "site" });
    if (common.kind === "refused" || own.kind === "refused") throw new Error("refused");
    expect(new Set(common.sites.map(({ threshold }) => threshold)).size).toBe(1);
    expect(new Set(own.sites.map(({ threshold }) => threshold)).size).toBeGreaterThan(1);
    const meanError = (threshold: number) => {
      const fixed = detect({ ...input, method: "fixed", thresholds: [threshold], thresholdScope: "site" });
      return fixed.kind === "refused" ? NaN : fixed.sites.reduce((sum, { fidelity }) => sum + 1 - (fidelity ?? 0), 0);
    };
    const best = meanError(common.sites[0].threshold);
    for (const threshold of [0.5, 1.5, 2.5, 3.5, 4.5, 5.5, 6.5, 7.5]) expect(meanError(threshold)).toBeGreaterThanOrEqual(best - 1e-12);
  });
});
