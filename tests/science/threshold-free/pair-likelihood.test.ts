import { readFileSync } from "node:fs";
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { createRandomStream } from "@/lib/science/stats/philox";
import { mean, standardDeviation } from "@/lib/science/stats/intervals";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { drawPoisson } from "@/lib/science/stats/random-variates";
import { poissonCountLaw, type CountLaw } from "@/lib/science/threshold-free/count-laws";
import { fitPairOutcomes } from "@/lib/science/threshold-free/pair-likelihood";
import { compressTable, tallyPair, type PairTally } from "@/lib/science/threshold-free/pair-tally";

const binary = (falseBright: number, falseDark: number): CountLaw => ({
  dark: Float64Array.of(1 - falseBright, falseBright),
  bright: Float64Array.of(falseDark, 1 - falseDark),
  brightWeight: 0.5,
});
const OVERLAPPING = poissonCountLaw({ dark: 3, bright: 8, brightWeight: 0.5 });
const WIDER = poissonCountLaw({ dark: 2, bright: 9, brightWeight: 0.5 });

/** Every cell with its exact probability under the shares `[++, +−, −+, −−]`. */
function expectedTally(shares: readonly number[], lawI: CountLaw, lawJ: CountLaw): PairTally {
  const cells = Array.from({ length: lawI.dark.length * lawJ.dark.length }, (_, at) => [Math.floor(at / lawJ.dark.length), at % lawJ.dark.length]);
  const probability = ([a, b]: number[]) =>
    shares[0] * lawI.bright[a] * lawJ.bright[b] + shares[1] * lawI.bright[a] * lawJ.dark[b] + shares[2] * lawI.dark[a] * lawJ.bright[b] + shares[3] * lawI.dark[a] * lawJ.dark[b];
  return { shots: 1, binI: Uint16Array.from(cells, ([a]) => a), binJ: Uint16Array.from(cells, ([, b]) => b), frequencies: Float64Array.from(cells, probability) };
}

function simulatedCounts(shots: number, shares: readonly number[], index: number): Uint16Array {
  const stream = createRandomStream(11, RANDOM_PURPOSES.simulation, index);
  const counts = new Uint16Array(2 * shots);
  for (let s = 0; s < shots; s++) {
    let u = stream.nextUniform();
    let outcome = 0;
    while (outcome < 3 && u >= shares[outcome]) u -= shares[outcome++];
    counts[2 * s] = drawPoisson(stream, outcome < 2 ? 8 : 3);
    counts[2 * s + 1] = drawPoisson(stream, outcome % 2 === 0 ? 9 : 2);
  }
  return counts;
}

const tallyOf = (counts: Uint16Array) => tallyPair(counts, 2, 0, 1, OVERLAPPING.dark.length, WIDER.dark.length);

/** Log likelihood a shot of shares, the slow way. */
function logLikelihood({ binI, binJ, frequencies, shots }: PairTally, shares: readonly number[]): number {
  let sum = 0;
  for (let c = 0; c < binI.length; c++) {
    const up = [OVERLAPPING.bright[binI[c]], WIDER.bright[binJ[c]]];
    const down = [OVERLAPPING.dark[binI[c]], WIDER.dark[binJ[c]]];
    sum += frequencies[c] * Math.log(shares[0] * up[0] * up[1] + shares[1] * up[0] * down[1] + shares[2] * down[0] * up[1] + shares[3] * down[0] * down[1]);
  }
  return sum / shots;
}

describe("the most likely outcomes of a pair", () => {
  // The example of the published checks, confusion-matrix.json: read shares q are the confusion matrix on p_true, two by two errors a site.
  it("undo a 4 × 4 confusion matrix where the counts have two values only", () => {
    const example = JSON.parse(readFileSync("tests/fixtures/threshold-free/confusion-matrix.json", "utf8"));
    const [first, second] = [0, 1].map((site) => binary(example.ed[site], example.eb[site]));
    const tally = { shots: 1, binI: Uint16Array.of(1, 1, 0, 0), binJ: Uint16Array.of(1, 0, 1, 0), frequencies: Float64Array.from(example.q as number[]) };
    const fit = fitPairOutcomes(tally, first, second, "up");
    fit.shares.forEach((share, a) => expect(share).toBeCloseTo(example.p_true[a], 7));
    [fit.meanI, fit.meanJ, fit.correlator].forEach((value, n) => expect(value).toBeCloseTo(example.true[n === 2 ? 3 : n], 7));
    expect(fitPairOutcomes(tally, first, second, "down").correlator).toBeCloseTo(fit.correlator, 7);
  });

  it("are the true ones when every cell has its exact share", () => {
    const shares = [0.42, 0.13, 0.05, 0.4];
    const fit = fitPairOutcomes(expectedTally(shares, OVERLAPPING, WIDER), OVERLAPPING, WIDER, "up");
    expect(fit.converged).toBe(true);
    fit.shares.forEach((share, a) => expect(share).toBeCloseTo(shares[a], 6));
  });

  it("meet the conditions of a maximum: the likelihood slopes along no share upwards, and is flat along those above 0", () => {
    fc.assert(
      fc.property(fc.integer({ min: 0, max: 5000 }), fc.constantFrom([0.25, 0.25, 0.25, 0.25], [0.5, 0, 0, 0.5], [0.9, 0.03, 0.03, 0.04]), (index, truth) => {
        const tally = tallyOf(simulatedCounts(400, truth, index));
        const fit = fitPairOutcomes(tally, OVERLAPPING, WIDER, "up");
        const here = logLikelihood(tally, fit.shares);
        fit.shares.forEach((share, a) => {
          const step = 1e-4;
          const towards = fit.shares.map((other, b) => other * (1 - step) + (a === b ? step : 0));
          const slope = (logLikelihood(tally, towards) - here) / step;
          expect(slope).toBeLessThan(2e-3);
          if (share > 0.01) expect(slope).toBeGreaterThan(-2e-2);
        });
      }),
      { numRuns: 40 },
    );
  });

  it("are at least as likely as any of 20 000 other shares, and those near the best of them are near", () => {
    const tally = tallyOf(simulatedCounts(500, [0.4, 0.1, 0.1, 0.4], 1));
    const fit = fitPairOutcomes(tally, OVERLAPPING, WIDER, "up");
    const stream = createRandomStream(5, RANDOM_PURPOSES.simulation, 9);
    let best = { value: Number.NEGATIVE_INFINITY, shares: [0.25, 0.25, 0.25, 0.25] };
    for (let trial = 0; trial < 20000; trial++) {
      // A random search that narrows around the best shares found: it knows nothing of expectation-maximisation.
      const width = 0.3 * 0.9995 ** trial;
      const moved = best.shares.map((share) => Math.max(1e-9, share + width * (stream.nextUniform() - 0.5)));
      const total = moved.reduce((sum, share) => sum + share, 0);
      const shares = moved.map((share) => share / total);
      const value = logLikelihood(tally, shares);
      if (value > best.value) best = { value, shares };
    }
    expect(logLikelihood(tally, fit.shares)).toBeGreaterThanOrEqual(best.value - 1e-10);
    fit.shares.forEach((share, a) => expect(share).toBeCloseTo(best.shares[a], 3));
  });

  it("become more likely with every iteration", () => {
    const tally = tallyOf(simulatedCounts(300, [0.6, 0.05, 0.05, 0.3], 2));
    const path = Array.from({ length: 60 }, (_, n) => fitPairOutcomes(tally, OVERLAPPING, WIDER, "up", n + 1).logLikelihood);
    path.slice(1).forEach((value, n) => expect(value).toBeGreaterThanOrEqual(path[n] - 1e-13));
    expect(path[59]).toBeGreaterThan(path[0]);
  });

  it("have a standard error that is the spread over simulated repeats", () => {
    const fits = Array.from({ length: 400 }, (_, n) => fitPairOutcomes(tallyOf(simulatedCounts(1000, [0.35, 0.15, 0.15, 0.35], 10 + n)), OVERLAPPING, WIDER, "up"));
    const found = fits.map(({ correlator }) => correlator);
    const spread = standardDeviation(found);
    expect(Math.abs(mean(found) - 0.4)).toBeLessThan((4 * spread) / 20);
    // The spread of 400 repeats is known to 3.5 %.
    expect(Math.abs(mean(fits.map(({ error }) => error)) / spread - 1)).toBeLessThan(0.12);
  });

  it("are not a number without shots", () => {
    const fit = fitPairOutcomes({ shots: 0, binI: new Uint16Array(0), binJ: new Uint16Array(0), frequencies: new Float64Array(0) }, OVERLAPPING, WIDER, "up");
    expect([fit.correlator, fit.meanI, fit.error].every(Number.isNaN)).toBe(true);
  });
});

it("a pair's tally holds each occurring pair of counts once, those beyond the last bin in it", () => {
  const tally = tallyPair(Uint16Array.of(0, 5, 9, 1, 0, 5, 200, 1, 1, 900), 2, 0, 1, 10, 6);
  const cells = Array.from(tally.binI, (a, c) => [a, tally.binJ[c], tally.frequencies[c]]);
  expect(cells).toEqual([[0, 5, 2], [1, 5, 1], [9, 1, 2]]);
  expect(tally.shots).toBe(5);
  expect(compressTable(Uint32Array.of(0, 3, 0, 2), 2).shots).toBe(5);
});
