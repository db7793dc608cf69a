import { describe, expect, it } from "vitest";
import quenches from "../../fixtures/checks/quenches.json";
import { besselSeries } from "@/lib/science/theory/bessel";
import { evolve, isingHamiltonian, xyHamiltonian } from "@/lib/science/theory/chebyshev-evolution";
import { powerLawCouplings } from "@/lib/science/theory/couplings";
import { isingCorrelator, isingMean } from "@/lib/science/theory/ising-quench";
import { allDown, connectedSpins, meanSpin, probabilities } from "@/lib/science/theory/spin-state";

// Source: tests/fixtures/checks/quenches.json, whose values were computed by exact diagonalisation and closed form.
const SMALL_ENOUGH = 12;

describe("the exact Ising quench", () => {
  it.each(quenches.ising.map((row) => row as number[]))("N=%d α=%d, sites %d and %d at J0t=%d", (sites, alpha, i, j, time, meanI, meanJ, _product, correlator) => {
    const couplings = powerLawCouplings(sites, alpha, 1);
    expect(isingMean(couplings, sites, i - 1, time)).toBeCloseTo(meanI, 12);
    expect(isingMean(couplings, sites, j - 1, time)).toBeCloseTo(meanJ, 12);
    expect(isingCorrelator(couplings, sites, i - 1, j - 1, time)).toBeCloseTo(correlator, 12);
  });

  it("agrees with the evolution of the state vector", () => {
    const couplings = powerLawCouplings(7, 0.8, 1);
    const chances = probabilities(evolve(isingHamiltonian(7, couplings), allDown(7), 0.37));
    expect(meanSpin(chances, 2)).toBeCloseTo(isingMean(couplings, 7, 2, 0.37), 12);
    expect(connectedSpins(chances, 1, 5)).toBeCloseTo(isingCorrelator(couplings, 7, 1, 5, 0.37), 12);
  });
});

describe("the exact XY quench", () => {
  // JSON has no infinity: null is the nearest-neighbour chain.
  const rows = quenches.xy.map((row) => row.map((value) => value ?? Infinity)).filter(([sites]) => sites <= SMALL_ENOUGH);

  it.each(rows)("N=%d α=%s at J0t=%d", (sites, alpha, time, mean1, meanMiddle, c12, c1N, cMiddle) => {
    const chances = probabilities(evolve(xyHamiltonian(sites, powerLawCouplings(sites, alpha, 1)), allDown(sites), time));
    expect(meanSpin(chances, 0)).toBeCloseTo(mean1, 10);
    expect(meanSpin(chances, sites / 2 - 1)).toBeCloseTo(meanMiddle, 10);
    expect(connectedSpins(chances, 0, 1)).toBeCloseTo(c12, 10);
    expect(connectedSpins(chances, 0, sites - 1)).toBeCloseTo(c1N, 10);
    expect(connectedSpins(chances, sites / 2 - 1, sites / 2)).toBeCloseTo(cMiddle, 10);
  });

  it("agrees at N=12, the longest chain that is simulated here", () => {
    const { sites, alpha, time, mean1, c12, c1N, cMiddle } = quenches.xyTwelve;
    const chances = probabilities(evolve(xyHamiltonian(sites, powerLawCouplings(sites, alpha, 1)), allDown(sites), time));
    expect(meanSpin(chances, 0)).toBeCloseTo(mean1, 9);
    expect(connectedSpins(chances, 0, 1)).toBeCloseTo(c12, 9);
    expect(connectedSpins(chances, 0, 11)).toBeCloseTo(c1N, 9);
    expect(connectedSpins(chances, 5, 6)).toBeCloseTo(cMiddle, 9);
  });

  it("keeps the norm, and two short steps are one long one", () => {
    const hamiltonian = xyHamiltonian(6, powerLawCouplings(6, 1, 1));
    const once = evolve(hamiltonian, allDown(6), 1.3);
    const twice = evolve(hamiltonian, evolve(hamiltonian, allDown(6), 0.5), 0.8);
    expect(probabilities(once).reduce((sum, chance) => sum + chance, 0)).toBeCloseTo(1, 12);
    once.real.forEach((value, s) => expect(value).toBeCloseTo(twice.real[s], 11));
  });
});

describe("Bessel functions", () => {
  // Squares of J_n at the arguments of the single-flip light cone; checks, section 7a.
  it.each([
    [0, 1, 0.585527499514],
    [3, 2, 0.016626361585],
    [5, 4, 0.017446884706],
    [10, 10, 0.043050484446],
  ])("J_%d(%d)² = %d", (order, x, square) => {
    expect(besselSeries(x)[order] ** 2).toBeCloseTo(square, 11);
  });
});
