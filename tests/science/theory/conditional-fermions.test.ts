import { describe, expect, it } from "vitest";
import { createRandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { evolve } from "@/lib/science/theory/chebyshev-evolution";
import { conditionalDeterminant, conditionalMajorana, type ConditionalState } from "@/lib/science/theory/conditional-fermions";
import { powerLawCouplings } from "@/lib/science/theory/couplings";
import { neelQuench } from "@/lib/science/theory/free-fermion-chain";
import { probabilities } from "@/lib/science/theory/spin-state";
import { isingFieldQuench } from "@/lib/science/theory/transverse-ising-chain";

/** The chance of one outcome, as the product of the chances of its sites one after another. */
function chanceOfOutcome(state: ConditionalState, sites: number, outcome: number): number {
  let product = 1;
  for (let site = 0; site < sites && product > 1e-9; site++) {
    const isUp = ((outcome >> site) & 1) === 1;
    const up = state.chanceUp(site);
    product *= isUp ? up : 1 - up;
    if (site + 1 < sites && product > 1e-9) state.condition(site, isUp);
  }
  return product;
}

/** The same chance by updates of whole matrices, without window or kernel. */
function plainDeterminant(sites: number, projection: Float64Array, outcome: number): number {
  let matrix = projection;
  let product = 1;
  for (let size = sites, site = 0; size > 0; size--, site++) {
    const isUp = ((outcome >> site) & 1) === 1;
    const up = matrix[0];
    product *= isUp ? up : 1 - up;
    matrix = plainUpdate(matrix, size, isUp);
  }
  return product;
}

/** K → K ∓ k kᵀ/P on a whole matrix, whose first site goes. */
function plainUpdate(matrix: Float64Array, size: number, isUp: boolean): Float64Array {
  const next = new Float64Array((size - 1) ** 2);
  const divisor = isUp ? -matrix[0] : 1 - matrix[0];
  for (let a = 1; a < size; a++) {
    for (let b = 1; b < size; b++) next[(a - 1) * (size - 1) + b - 1] = matrix[a * size + b] + (matrix[a * size] * matrix[b]) / divisor;
  }
  return next;
}

describe("a free-fermion state read site after site", () => {
  it("has the outcome chances of the transverse-field chain's state vector without a field", () => {
    const sites = 7;
    const start = { sites, real: new Float64Array(2 ** sites), imaginary: new Float64Array(2 ** sites) };
    start.real[2 ** sites - 1] = 1;
    const exact = probabilities(evolve({ sites, couplings: powerLawCouplings(sites, Infinity, 1), flip: -1, agree: 0 }, start, 0.6));
    const state = conditionalMajorana(isingFieldQuench(sites, 1, 0, Float64Array.of(0.6))[0]);
    exact.forEach((chance, outcome) => expect(Math.abs(chanceOfOutcome(state, sites, outcome) - chance)).toBeLessThan(2e-6));
  });

  it.each([0.4, 1.1, 3])("agrees with the plain update on whole matrices for the Néel quench at Jt = %d", (time) => {
    const sites = 10;
    const [law] = neelQuench(sites, Float64Array.of(time));
    const state = conditionalDeterminant(law);
    let total = 0;
    for (let outcome = 0; outcome < 2 ** sites; outcome++) {
      const plain = plainDeterminant(sites, law.projection, outcome);
      // A plain update after an impossible outcome divides by zero.
      if (!(plain > 1e-7)) continue;
      const chance = chanceOfOutcome(state, sites, outcome);
      expect(Math.abs(chance - plain)).toBeLessThan(1e-5 * plain + 1e-7);
      total += chance;
    }
    expect(total).toBeCloseTo(1, 3);
  });

  it("draws on a window that moves along a long chain as on the whole of it", () => {
    const sites = 60;
    const [law] = neelQuench(sites, Float64Array.of(1.5));
    const state = conditionalDeterminant(law);
    const stream = createRandomStream(4, RANDOM_PURPOSES.simulation, 0);
    let matrix = law.projection;
    for (let site = 0, size = sites; size > 1; site++, size--) {
      const up = matrix[0];
      expect(Math.abs(state.chanceUp(site) - up)).toBeLessThan(1e-3);
      const isUp = stream.nextUniform() < up;
      matrix = plainUpdate(matrix, size, isUp);
      state.condition(site, isUp);
    }
  });
});
