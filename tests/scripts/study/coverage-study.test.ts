import { beforeAll, describe, expect, it } from "vitest";
import { CORRELATOR_CELLS, correlatorCoverage, correlatorTable, mergeCorrelatorTallies, type CorrelatorTally } from "@/scripts/study/correlator-coverage";
import { coverageOf } from "@/scripts/study/coverage-tally";
import { FRONT_CELLS } from "@/scripts/study/front-cells";
import { frontCoverage, mergeFrontTallies, type FrontTally } from "@/scripts/study/front-coverage";
import { frontTable } from "@/scripts/study/front-table";

const REPEATS = 40;

/** A row of the study, on a smaller chain. */
function frontOf(name: string, shots: number, repeats: number): FrontTally {
  const cell = FRONT_CELLS.find((one) => one.name === name && one.shots === shots);
  if (cell === undefined) throw new Error(`no cell ${name} with ${shots} shots`);
  return frontCoverage({ ...cell, sites: 8, times: 20 }, 7, 0, repeats);
}

function correlatorOf(mean: number, shots: number): CorrelatorTally {
  const at = CORRELATOR_CELLS.findIndex((cell) => cell.mean === mean && cell.shots === shots);
  return correlatorCoverage(CORRELATOR_CELLS[at], at, 7, 0, REPEATS);
}

describe("95 % intervals of C", () => {
  it("hold the truth in 95 % of 320 pairs, within four standard errors, where outcomes are frequent", () => {
    const { kinds, fewFlips } = correlatorOf(-0.6, 1000);
    for (const kind of ["percentile", "basic", "bca"] as const) expect(Math.abs(coverageOf(kinds[kind]) - 0.95)).toBeLessThan(0.049);
    expect(fewFlips).toBe(0);
  });

  it("hold it too seldom where an outcome is rare, and are marked there", () => {
    const { kinds, fewFlips, pairs } = correlatorOf(-0.96, 250);
    expect(coverageOf(kinds.percentile)).toBeLessThan(0.85);
    expect(fewFlips / pairs).toBeGreaterThan(0.95);
  });
});

describe("95 % intervals of a front by the default method", () => {
  let straight: FrontTally;
  let opening: FrontTally;
  beforeAll(() => {
    straight = frontOf("straight", 1000, REPEATS);
    opening = frontOf("accelerating", 1000, REPEATS);
  }, 120_000);

  it("hold γ and the crossing times in at least 85 % of forty repeats", () => {
    for (const { isotonic } of [straight, opening]) {
      expect(coverageOf(isotonic.gamma.percentile)).toBeGreaterThanOrEqual(0.85);
      expect(coverageOf(isotonic.crossings)).toBeGreaterThanOrEqual(0.92);
      expect(isotonic.gamma.percentile.repeats).toBe(REPEATS);
    }
    expect(straight.isotonic.trueGamma).toBeCloseTo(1, 1);
    expect(opening.isotonic.trueGamma).toBeCloseTo(0.65, 1);
  });

  it("call hardly any straight front faster than linear, and every accelerating one", () => {
    expect(straight.isotonic.fasterThanLinear).toBeLessThanOrEqual(4);
    expect(opening.isotonic.fasterThanLinear).toBeGreaterThanOrEqual(38);
    expect(opening.isotonic.slowerThanLinear).toBe(0);
  });
});

describe("the study", () => {
  it("is the same however its repeats are shared out", () => {
    const cell = FRONT_CELLS[0];
    const merged = mergeFrontTallies(frontCoverage(cell, 3, 0, 1), frontCoverage(cell, 3, 1, 1));
    const whole = frontCoverage(cell, 3, 0, 2);
    // Sums of floating numbers may differ in the last digit, which the table does not show.
    expect(frontTable(FRONT_CELLS.map(() => merged))).toBe(frontTable(FRONT_CELLS.map(() => whole)));
    expect(merged.isotonic.crossings.held).toBe(whole.isotonic.crossings.held);
    const [first, second] = [0, 1].map((run) => correlatorCoverage(CORRELATOR_CELLS[0], 0, 3, run, 1));
    const both = correlatorCoverage(CORRELATOR_CELLS[0], 0, 3, 0, 2);
    expect(correlatorTable(CORRELATOR_CELLS.map(() => mergeCorrelatorTallies(first, second)))).toBe(correlatorTable(CORRELATOR_CELLS.map(() => both)));
  });

  it("prints a row for each cell, and each method", () => {
    const front = frontCoverage(FRONT_CELLS[0], 3, 0, 1);
    expect(frontTable(FRONT_CELLS.map(() => front)).split("\n")).toHaveLength(2 + 3 * FRONT_CELLS.length);
    const correlator = correlatorCoverage(CORRELATOR_CELLS[0], 0, 3, 0, 1);
    expect(correlatorTable(CORRELATOR_CELLS.map(() => correlator)).split("\n")).toHaveLength(2 + CORRELATOR_CELLS.length);
  });
});
