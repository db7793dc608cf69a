import { describe, expect, it } from "vitest";
import { bootstrapKernel } from "@/lib/science/correlators/bootstrap-kernel";
import { layOutBootstrap } from "@/lib/science/correlators/bootstrap-layout";
import { BYTE_SHARES, fineDrawLimits, MULTIPLICITY_RATE } from "@/lib/science/correlators/multiplicity-law";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { chiSquareSurvival, normalCdf } from "@/lib/science/stats/special-functions";
import { nextXoshiro, plainMultiplicities } from "@/tests/science/correlators/plain-bootstrap";

/** Multiplicities `[shot][32]` of one block of replicates. */
function drawBlock(shots: number, block: number, time: number, seed: number): Uint8Array {
  const layout = layOutBootstrap(shots, 2, 32, 1, 0);
  const kernel = bootstrapKernel(layout.bytes);
  new Uint32Array(kernel.memory.buffer, layout.fineTable, 16).set(fineDrawLimits());
  kernel.drawMultiplicities(layout.weights, shots, block, time, RANDOM_PURPOSES.bootstrapShots, RANDOM_PURPOSES.bootstrapRepairs, seed, 0, layout.fineTable, layout.scratch);
  return new Uint8Array(kernel.memory.buffer, layout.weights, shots * 32).slice();
}

function column(weights: Uint8Array, r: number): number[] {
  return Array.from({ length: weights.length / 32 }, (_, s) => weights[s * 32 + r]);
}

function factorial(n: number): number {
  return n <= 1 ? 1 : n * factorial(n - 1);
}

describe("the multiplicities of the bootstrap", () => {
  it("start from the Poisson law to 2e-12 a value", () => {
    const limits = fineDrawLimits();
    for (let n = 0; n < 15; n++) {
      const fine = (limits[n] - (n === 0 ? 0 : limits[n - 1])) / 2 ** 32;
      const drawn = ((BYTE_SHARES[n] ?? 0) + 2 * fine) / 256;
      const law = (Math.exp(-MULTIPLICITY_RATE) * MULTIPLICITY_RATE ** n) / factorial(n);
      expect(Math.abs(drawn - law)).toBeLessThan(2e-12);
    }
  });

  // The sequence from state {1, 2, 3, 4} of the generator's published source, in checks, section 13.
  it("follow a twin that gives the published words of xoshiro128**", () => {
    const state = Uint32Array.of(1, 2, 3, 4);
    expect(Array.from({ length: 6 }, () => nextXoshiro(state))).toEqual([11520, 0, 5927040, 70819200, 2031721883, 1637235492]);
  });

  it.each([1, 2, 5, 63, 64, 65, 1000])("of %i shots are those of the plain twin", (shots) => {
    const weights = drawBlock(shots, 2, 9, 4711);
    for (const r of [0, 3, 17, 31]) expect(column(weights, r)).toEqual(plainMultiplicities(4711, 9, 64 + r, shots));
  });

  // Drawing 3 of 3 shots with replacement has 10 outcomes of known probability 3!/(Π n_s!)/27.
  it("of three shots have the multinomial law, outcome by outcome", () => {
    const found = new Map<string, number>();
    const blocks = 3000;
    for (let block = 0; block < blocks; block++) {
      const weights = drawBlock(3, block, 0, 99);
      for (let r = 0; r < 32; r++) {
        const outcome = column(weights, r).join("");
        found.set(outcome, (found.get(outcome) ?? 0) + 1);
      }
    }
    expect(found.size).toBe(10);
    let chiSquare = 0;
    for (const [outcome, count] of found) {
      const ways = 6 / [...outcome].reduce((product, n) => product * factorial(Number(n)), 1);
      const expected = (blocks * 32 * ways) / 27;
      chiSquare += (count - expected) ** 2 / expected;
    }
    expect(chiSquareSurvival(chiSquare, 9)).toBeGreaterThan(1e-3);
  });

  it("of 4000 shots have the binomial marginal law and the multinomial spread of a half's share", () => {
    const shots = 4000;
    const blocks = 100;
    const found = new Float64Array(8);
    let squares = 0;
    for (let block = 0; block < blocks; block++) {
      const weights = drawBlock(shots, block, 1, 7);
      weights.forEach((n) => (found[Math.min(n, 7)] += 1));
      for (let r = 0; r < 32; r++) {
        const firstHalf = column(weights, r)
          .slice(0, shots / 2)
          .reduce((sum, n) => sum + n, 0);
        squares += (firstHalf - shots / 2) ** 2;
      }
    }
    const draws = blocks * 32 * shots;
    let probability = (1 - 1 / shots) ** shots;
    let rest = 1;
    let chiSquare = 0;
    for (let n = 0; n < 8; n++) {
      const expected = draws * (n === 7 ? rest : probability);
      chiSquare += (found[n] - expected) ** 2 / expected;
      rest -= probability;
      probability *= (shots - n) / (n + 1) / (shots - 1);
    }
    // Totals are fixed, so the statistic is a little below χ² with 7 degrees of freedom: the test only errs to be mild.
    expect(chiSquareSurvival(chiSquare, 7)).toBeGreaterThan(1e-3);
    // The half's share is Binomial(M, ½): variance M/4; its estimate from 3200 replicates has relative error 2.5 %.
    const deviation = (squares / (blocks * 32) / (shots / 4) - 1) / Math.sqrt(2 / (blocks * 32));
    expect(normalCdf(-Math.abs(deviation))).toBeGreaterThan(5e-4);
  });
});
