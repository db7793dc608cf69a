import { describe, expect, it } from "vitest";
import { crossingsOf } from "@/lib/science/front/analyse-front";
import { DEFAULT_FRONT_RULE, type CrossingMethod } from "@/lib/science/front/front-rule";
import { fitPowerLaw } from "@/lib/science/front/power-law-fit";
import { evolve, xyHamiltonian } from "@/lib/science/theory/chebyshev-evolution";
import { powerLawCouplings } from "@/lib/science/theory/couplings";
import { isingCorrelator } from "@/lib/science/theory/ising-quench";
import { allDown, connectedSpins, probabilities } from "@/lib/science/theory/spin-state";
import { traceSetOf } from "@/tests/science/front/run-fixtures";
import { publishedChecks } from "./published-checks";

// Numeric checks, section 11, simulation 2: exact XY quench of eight spins, edge spin, distances 1–5, 24 times up to J₀t = 1.2.
describe.each(publishedChecks().exactFronts)("the exact XY quench of eight spins with α = $alpha (null: nearest neighbours)", ({ alpha, crossings, gamma }) => {
  const times_us = Array.from({ length: 24 }, (_, k) => (k + 1) / 20);
  const distances = [1, 2, 3, 4, 5];
  const hamiltonian = xyHamiltonian(8, powerLawCouplings(8, alpha ?? Infinity, 1));
  const chances = times_us.map((time) => probabilities(evolve(hamiltonian, allDown(8), time)));
  const traces = traceSetOf({ times_us, distances, value: distances.map((r) => chances.map((chance) => connectedSpins(chance, 0, r))) });

  it.each(["first", "last-upcrossing"] as const)("has the tabulated crossing times and slope of ln t against ln r by %s", (method: CrossingMethod) => {
    const found = Float64Array.from(crossingsOf(traces, { ...DEFAULT_FRONT_RULE, method, hold: 1 }), ({ time_us }) => time_us);
    crossings.forEach((time, r) => expect(found[r]).toBeCloseTo(time, 9));
    expect(fitPowerLaw(Float64Array.from(distances), found, found).slope).toBeCloseTo(gamma, 9);
  });
});

// Numeric checks, section 12: C → 4J²t² as t → 0, so that C falls as r^(−2α); eight spins at J₀t = 1e-3, edge spin.
it.each([
  [1, -1.999975],
  [2, -3.999979],
])("the Ising quench with α = %d starts as 4J²t², with the tabulated slope of ln C against ln r", (alpha, slope) => {
  const couplings = powerLawCouplings(8, alpha, 1);
  const distance = Float64Array.of(1, 2, 3, 4, 5, 6, 7);
  const start = distance.map((r) => isingCorrelator(couplings, 8, 0, r, 1e-3));
  // What comes next is of order t²: with up to seven neighbours, some tens of (J₀t)².
  start.forEach((value, r) => expect(Math.abs(value / (4e-6 * couplings[r + 1] ** 2) - 1)).toBeLessThan(5e-5));
  expect(Math.abs(fitPowerLaw(distance, start, start).slope - slope)).toBeLessThan(1e-6);
});
