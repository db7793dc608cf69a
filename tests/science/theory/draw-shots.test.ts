import { describe, expect, it } from "vitest";
import { countUps, connectedCorrelators, meanSpins } from "@/lib/science/correlators/connected-correlators";
import { exactReadoutCorrection } from "@/lib/science/correlators/readout-correction";
import { wordsPerSite, type PackedSpins } from "@/lib/science/correlators/packed-spins";
import { listPairs, pairCount } from "@/lib/science/correlators/pairs";
import { createRandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { drawShots } from "@/lib/science/theory/draw-shots";
import { evolve } from "@/lib/science/theory/chebyshev-evolution";
import { powerLawCouplings } from "@/lib/science/theory/couplings";
import { determinantMoments, neelQuench } from "@/lib/science/theory/free-fermion-chain";
import { gaussianLawOf } from "@/lib/science/theory/gaussian-law";
import { correlatorOfLatent, latentOfCorrelator, latentThreshold } from "@/lib/science/theory/latent-correlation";
import { flipReadout } from "@/lib/science/theory/readout-flips";
import type { SpinLaw, SpinMoments } from "@/lib/science/theory/spin-law";
import { probabilities } from "@/lib/science/theory/spin-state";
import { isingFieldQuench, majoranaMoments } from "@/lib/science/theory/transverse-ising-chain";

const SHOTS = 100_000;

function streamOf(index: number) {
  return createRandomStream(11, RANDOM_PURPOSES.simulation, index);
}

/** Share of shots with each outcome, `[Σ 2^site of the spins that are up]`. */
function outcomeShares({ sites, shots, words }: PackedSpins): Float64Array {
  const shares = new Float64Array(2 ** sites);
  const stride = wordsPerSite(shots);
  for (let s = 0; s < shots; s++) {
    let outcome = 0;
    for (let i = 0; i < sites; i++) outcome |= ((words[i * stride + (s >>> 5)] >>> (s & 31)) & 1) << i;
    shares[outcome] += 1 / shots;
  }
  return shares;
}

/** Σ (seen − expected)² / expected over outcomes expected at least 5 times, with the number of those. */
function chiSquare(shares: Float64Array, chances: Float64Array, shots: number) {
  let sum = 0;
  let cells = 0;
  chances.forEach((chance, outcome) => {
    if (chance * shots < 5) return;
    sum += (shots * (shares[outcome] - chance) ** 2) / chance;
    cells += 1;
  });
  return { sum, cells };
}

/** Means and correlators of the shots lie within five standard errors of the law's, the largest deviation of a few hundred. */
function expectMoments(spins: PackedSpins, { mean, correlator }: SpinMoments): void {
  const counts = countUps(spins);
  const seen = connectedCorrelators(counts, "unbiased", null);
  const pairs = listPairs(spins.sites);
  meanSpins(counts, null).forEach((value, i) => expect(Math.abs(value - mean[i])).toBeLessThan(5 * Math.sqrt((1.0001 - mean[i] ** 2) / spins.shots)));
  seen.forEach((value, pair) => {
    const [a, b] = [mean[pairs[2 * pair]], mean[pairs[2 * pair + 1]]];
    const variance = (1 - a * a) * (1 - b * b) + 4 * a * b * correlator[pair] - correlator[pair] ** 2;
    expect(Math.abs(value - correlator[pair])).toBeLessThan(5 * Math.sqrt((variance + 1e-4) / spins.shots));
  });
}

describe("shots drawn exactly from a nearest-neighbour state", () => {
  it("have the outcome chances of the transverse-field chain's state vector without a field", () => {
    const sites = 6;
    const start = { sites, real: new Float64Array(2 ** sites), imaginary: new Float64Array(2 ** sites) };
    start.real[2 ** sites - 1] = 1;
    const chances = probabilities(evolve({ sites, couplings: powerLawCouplings(sites, Infinity, 1), flip: -1, agree: 0 }, start, 0.6));
    const shares = outcomeShares(drawShots(isingFieldQuench(sites, 1, 0, Float64Array.of(0.6))[0], SHOTS, streamOf(0)));
    const { sum, cells } = chiSquare(shares, chances, SHOTS);
    // Mean cells − 1, standard deviation √(2 cells): four deviations.
    expect(sum).toBeLessThan(cells + 4 * Math.sqrt(2 * cells));
    chances.forEach((chance, outcome) => chance < 1e-12 && expect(shares[outcome]).toBe(0));
  });

  it("have as outcome chances the determinants of the Néel quench", () => {
    const sites = 6;
    const [law] = neelQuench(sites, Float64Array.of(0.8));
    const chances = Float64Array.from({ length: 2 ** sites }, (_, outcome) => outcomeDeterminant(law.projection, sites, outcome));
    expect(chances.reduce((sum, chance) => sum + chance, 0)).toBeCloseTo(1, 12);
    const { sum, cells } = chiSquare(outcomeShares(drawShots(law, SHOTS, streamOf(1))), chances, SHOTS);
    expect(sum).toBeLessThan(cells + 4 * Math.sqrt(2 * cells));
  });

  it("keep half of the spins up in every shot of the Néel quench", () => {
    const spins = drawShots(neelQuench(20, Float64Array.of(1.3))[0], 500, streamOf(2));
    const stride = wordsPerSite(500);
    for (let s = 0; s < 500; s++) {
      let up = 0;
      for (let i = 0; i < 20; i++) up += (spins.words[i * stride + (s >>> 5)] >>> (s & 31)) & 1;
      expect(up).toBe(10);
    }
  });

  it.each([0, 0.15, 0.6, 2.5])("have the law's means and correlators on 24 sites at Jt = %d", (time) => {
    const [neel] = neelQuench(24, Float64Array.of(time));
    const [ising] = isingFieldQuench(24, 1, 1, Float64Array.of(time));
    expectMoments(drawShots(neel, 20_000, streamOf(3)), determinantMoments(neel));
    expectMoments(drawShots(ising, 20_000, streamOf(4)), majoranaMoments(ising));
  });

  it("are none when none are asked", () => {
    expect(drawShots(neelQuench(4, Float64Array.of(1))[0], 0, streamOf(5)).words).toHaveLength(0);
  });
});

/** P(exactly these are up) = det of K on the set and 1 − K off it, rows of the complement negated: det(I_off − D K), D = ±1. */
function outcomeDeterminant(projection: Float64Array, sites: number, outcome: number): number {
  const matrix = projection.map((value, at) => {
    const i = Math.floor(at / sites);
    const isUp = ((outcome >> i) & 1) === 1;
    if (isUp) return value;
    return (at % (sites + 1) === 0 ? 1 : 0) - value;
  });
  return determinant(matrix, sites);
}

function determinant(matrix: Float64Array, size: number): number {
  let product = 1;
  for (let column = 0; column < size; column++) {
    let pivot = column;
    for (let row = column; row < size; row++) if (Math.abs(matrix[row * size + column]) > Math.abs(matrix[pivot * size + column])) pivot = row;
    if (matrix[pivot * size + column] === 0) return 0;
    if (pivot !== column) {
      product = -product;
      for (let m = 0; m < size; m++) [matrix[pivot * size + m], matrix[column * size + m]] = [matrix[column * size + m], matrix[pivot * size + m]];
    }
    product *= matrix[column * size + column];
    for (let row = column + 1; row < size; row++) {
      const factor = matrix[row * size + column] / matrix[column * size + column];
      for (let m = column; m < size; m++) matrix[row * size + m] -= factor * matrix[column * size + m];
    }
  }
  return product;
}

describe("latent correlations", () => {
  // Sheppard 1899: for thresholds at zero, C = (2/π) asin ρ.
  it.each([-0.95, -0.3, 0.1, 0.7, 0.99])("give Sheppard's correlator for unbiased spins at ρ = %d", (rho) => {
    expect(correlatorOfLatent(rho, 0, 0)).toBeCloseTo((2 / Math.PI) * Math.asin(rho), 12);
  });

  // P(X < 0, Y < 0) etc. from any table of the bivariate normal; here by the identity at ρ → 1: P(both) = the smaller P.
  it("come near the largest possible correlator when ρ is near 1", () => {
    const [h, k] = [latentThreshold(0.2), latentThreshold(-0.4)];
    expect(correlatorOfLatent(0.9999, h, k)).toBeCloseTo(4 * (0.3 - 0.6 * 0.3), 2);
  });

  it.each([
    [0.3, 0.4, -0.2],
    [-0.3, 0.1, -0.2],
    [0.001, 0.9, -0.9],
    [-0.02, -0.8, -0.85],
    [0.6, 0.3, 0.2],
  ])("are found again from the correlator %d of means %d and %d", (correlator, first, second) => {
    const [h, k] = [latentThreshold(first), latentThreshold(second)];
    expect(correlatorOfLatent(latentOfCorrelator(correlator, h, k), h, k)).toBeCloseTo(correlator, 10);
  });

  it("are zero beside a spin that never flips, and stop short of ±1 for what cannot be", () => {
    expect(latentOfCorrelator(0.2, Infinity, 0)).toBe(0);
    expect(latentOfCorrelator(0.9, latentThreshold(0.9), latentThreshold(-0.9))).toBeCloseTo(0.9999, 12);
  });
});

describe("the Gaussian surrogate of given moments", () => {
  it("keeps means and correlators of the transverse-field chain, and its shots have them", () => {
    const moments = majoranaMoments(isingFieldQuench(12, 1, 1, Float64Array.of(0.9))[0]);
    const { law, correlator, largestChange } = gaussianLawOf(moments);
    expect(largestChange).toBeLessThan(0.005);
    expectMoments(drawShots(law, 40_000, streamOf(6)), { mean: moments.mean, correlator });
  });

  it("says how far it had to move correlators that no spins can have together", () => {
    const impossible = { mean: new Float64Array(3), correlator: Float64Array.of(-0.6, -0.6, -0.6) };
    const { largestChange, correlator } = gaussianLawOf(impossible);
    // Three unbiased spins: C₁₂ + C₁₃ + C₂₃ ≥ −1, since the square of their sum is at least 1.
    expect(correlator[0] + correlator[1] + correlator[2]).toBeGreaterThanOrEqual(-1);
    expect(largestChange).toBeGreaterThan(0.25);
  });
});

describe("readout flips", () => {
  const errors = { falseBright: Float64Array.of(0.02, 0.1, 0), falseDark: Float64Array.of(0.05, 0.01, 0) };
  const shapes: [string, SpinLaw][] = [["Néel", neelQuench(3, Float64Array.of(0.5))[0]]];

  it.each(shapes)("come at the stated rates, and are undone by the correction (%s)", (_, law) => {
    if (law.kind !== "determinant") throw new Error("a determinant is expected here");
    const moments = determinantMoments(law);
    for (const brightIs of ["up", "down"] as const) {
      const read = flipReadout(drawShots(law, SHOTS, streamOf(7)), errors, brightIs, streamOf(8));
      const correction = exactReadoutCorrection(errors, brightIs);
      const counts = countUps(read);
      meanSpins(counts, correction).forEach((value, i) => expect(Math.abs(value - moments.mean[i])).toBeLessThan(0.02));
      const seen = connectedCorrelators(counts, "plug-in", correction);
      expect(seen).toHaveLength(pairCount(3));
      seen.forEach((value, pair) => expect(Math.abs(value - moments.correlator[pair])).toBeLessThan(0.02));
      expect(meanSpins(counts, null)[2]).toBeCloseTo(meanSpins(countUps(drawShots(law, SHOTS, streamOf(7))), null)[2], 12);
    }
  });

  it("touch no shot beyond the last one", () => {
    const spins: PackedSpins = { sites: 1, shots: 5, words: new Uint32Array(1) };
    const read = flipReadout(spins, { falseBright: Float64Array.of(1), falseDark: Float64Array.of(0) }, "up", streamOf(9));
    expect(read.words[0]).toBe(0b11111);
  });
});
