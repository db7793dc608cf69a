import { describe, expect, it } from "vitest";
import { pairLaw } from "@/lib/science/correlators/bootstrap-law";
import { connectedCorrelators, type UpCounts } from "@/lib/science/correlators/connected-correlators";
import { standardDeviation } from "@/lib/science/stats/intervals";
import { pairVariance } from "@/lib/science/studies/sweep-traces";
import { publishedChecks } from "./published-checks";

const { correlatorErrors, unbiasedVariancesOfSix } = publishedChecks();

/** Two sites with the joint outcomes ++, +−, −+, −−. */
function twoSites([both, onlyI, onlyJ, neither]: readonly number[]): UpCounts {
  return { shots: both + onlyI + onlyJ + neither, up: Uint32Array.of(both + onlyI, both + onlyJ), bothUp: Uint32Array.of(both) };
}

/** √((n−1)² s²/n) of the estimates that leave out one shot each, s their standard deviation. */
function jackknifeError(outcomes: readonly number[]): number {
  const shots = outcomes.reduce((sum, count) => sum + count, 0);
  const values = outcomes.flatMap((count, left) => {
    const rest = outcomes.map((other, at) => other - (at === left ? 1 : 0));
    return count === 0 ? [] : new Array<number>(count).fill(connectedCorrelators(twoSites(rest), "plug-in", null)[0]);
  });
  return (standardDeviation(values) * (shots - 1)) / Math.sqrt(shots);
}

// Numeric checks, section 4: the estimator table, closed forms confirmed by full enumeration.
describe.each(correlatorErrors)("outcomes $outcomes of a pair", ({ outcomes, plugIn, unbiased, deltaError, jackknifeError: jackknife }) => {
  const counts = twoSites(outcomes);

  it("have the tabulated estimates", () => {
    expect(connectedCorrelators(counts, "plug-in", null)[0]).toBeCloseTo(plugIn, 14);
    expect(connectedCorrelators(counts, "unbiased", null)[0]).toBeCloseTo(unbiased, 12);
  });

  it("have the tabulated errors of the delta method and of the jackknife", () => {
    expect(Math.sqrt(pairVariance(counts, 0, 1, 0))).toBeCloseTo(deltaError, 12);
    expect(jackknifeError(outcomes)).toBeCloseTo(jackknife, 12);
  });
});

/** Calls `visit` with every way to share `shots` among four outcomes, and its multinomial chance. */
function everySample(shots: number, shares: readonly number[], visit: (outcomes: number[], chance: number) => void): void {
  const factorial = (n: number): number => (n < 2 ? 1 : n * factorial(n - 1));
  for (let a = 0; a <= shots; a++) {
    for (let b = 0; a + b <= shots; b++) {
      for (let c = 0; a + b + c <= shots; c++) {
        const outcomes = [a, b, c, shots - a - b - c];
        visit(outcomes, outcomes.reduce((product, n, at) => (product * shares[at] ** n) / factorial(n), factorial(shots)));
      }
    }
  }
}

// Numeric checks, section 4: exact variance of the unbiased estimator at n = 6.
describe.each(unbiasedVariancesOfSix)("six shots with chances $shares", ({ shares, variance }) => {
  const [meanI, meanJ] = [shares[0] + shares[1] - shares[2] - shares[3], shares[0] - shares[1] + shares[2] - shares[3]];
  const truth = shares[0] - shares[1] - shares[2] + shares[3] - meanI * meanJ;

  it("scatter the unbiased estimate about the true C with the tabulated variance, over all samples", () => {
    let [mean, square] = [0, 0];
    everySample(6, shares, (outcomes, chance) => {
      const value = connectedCorrelators(twoSites(outcomes), "unbiased", null)[0];
      mean += chance * value;
      square += chance * value * value;
    });
    expect(mean).toBeCloseTo(truth, 12);
    expect(square - mean * mean).toBeCloseTo(variance, 10);
  });

  it("have that variance in the bootstrap's closed form", () => {
    const { mean, deviation } = pairLaw([6 * shares[0], 6 * shares[1], 6 * shares[2], 6 * shares[3]]);
    expect((mean * 6) / 5).toBeCloseTo(truth, 12);
    expect((deviation * 6) / 5).toBeCloseTo(Math.sqrt(variance), 10);
  });
});
