import { describe, expect, it } from "vitest";
import { correctedLaw, pairLaw, type BootstrapLaw } from "@/lib/science/correlators/bootstrap-law";
import { connectedCorrelators, meanSpins, type UpCounts } from "@/lib/science/correlators/connected-correlators";
import { drawReadoutReplicates, exactReadoutCorrection, readoutFactors } from "@/lib/science/correlators/readout-correction";
import { pairVariance } from "@/lib/science/studies/sweep-traces";
import { publishedChecks, relativeError } from "./published-checks";

// Numeric checks, section 3; the formulas follow Shen and Duan, New J. Phys. 14, 053053 (2012).
const example = publishedChecks().readout;
const errors = { falseBright: Float64Array.from(example.ed), falseDark: Float64Array.from(example.eb) };

/** Large enough that the example's shares are whole numbers of shots; errors scale with 1/√shots. */
const SHOTS = 1_000_000;
const outcomes = example.q.map((share) => Math.round(share * SHOTS));
const counts: UpCounts = {
  shots: SHOTS,
  up: Uint32Array.of(outcomes[0] + outcomes[1], outcomes[0] + outcomes[2]),
  bothUp: Uint32Array.of(outcomes[0]),
};
const perShots = Math.sqrt(SHOTS / example.shots);

/** The chances that a pair reads ++, +−, −+, −− when it is in each of those states, row for row the reading. */
function confusion(): number[][] {
  const site = (i: number) => [
    [1 - example.eb[i], example.ed[i]],
    [example.eb[i], 1 - example.ed[i]],
  ];
  const [first, second] = [site(0), site(1)];
  return [0, 1, 2, 3].map((read) => [0, 1, 2, 3].map((state) => first[read >> 1][state >> 1] * second[read & 1][state & 1]));
}

/** Solves A x = b by elimination with row exchange. */
function solve(matrix: number[][], right: readonly number[]): number[] {
  const rows = matrix.map((row, at) => [...row, right[at]]);
  rows.forEach((_, column) => {
    const best = rows.slice(column).reduce((most, row, at) => (Math.abs(row[column]) > Math.abs(rows[most][column]) ? column + at : most), column);
    [rows[column], rows[best]] = [rows[best], rows[column]];
    rows.forEach((row, at) => {
      if (at === column) return;
      const factor = row[column] / rows[column][column];
      rows[at] = row.map((value, m) => value - factor * rows[column][m]);
    });
  });
  return rows.map((row, at) => row[row.length - 1] / row[at]);
}

function correlatorOf([both, onlyI, onlyJ, neither]: readonly number[]): number {
  return both - onlyI - onlyJ + neither - (both + onlyI - onlyJ - neither) * (both - onlyI + onlyJ - neither);
}

describe("the readout example", () => {
  it("reads the tabulated shares, which the 4 × 4 inversion takes back to the truth", () => {
    const read = confusion().map((row) => row.reduce((sum, chance, state) => sum + chance * example.p_true[state], 0));
    read.forEach((share, at) => expect(share).toBeCloseTo(example.q[at], 15));
    solve(confusion(), example.q).forEach((share, at) => expect(share).toBeCloseTo(example.p_true[at], 14));
  });

  it("is corrected to the same means and C as by the 4 × 4 inversion", () => {
    const readout = exactReadoutCorrection(errors, "up");
    const inverted = solve(confusion(), example.q);
    const corrected = connectedCorrelators(counts, "plug-in", readout)[0];
    expect(corrected).toBeCloseTo(correlatorOf(inverted), 13);
    expect(corrected).toBeCloseTo(example.true[3], 13);
    meanSpins(counts, readout).forEach((mean, i) => expect(mean).toBeCloseTo(example.true[i], 13));
    expect(connectedCorrelators(counts, "plug-in", null)[0]).toBeCloseTo(example.meas[3], 13);
    meanSpins(counts, null).forEach((mean, i) => expect(mean).toBeCloseTo(example.meas[i], 13));
  });

  it("has the standard errors as read, and with the ε's known", () => {
    const raw = Math.sqrt(pairVariance(counts, 0, 1, 0)) * perShots;
    const [first, second] = readoutFactors(errors);
    expect(raw).toBeCloseTo(example.rawError, 10);
    expect(raw / (first * second)).toBeCloseTo(example.knownError, 10);
  });

  it("has the standard error with the ε's drawn from 2 000 calibration shots of each kind", () => {
    const { calibrationShots, shots } = example;
    const evidence = {
      falseBrightShots: errors.falseBright.map((rate) => rate * calibrationShots),
      darkShots: Float64Array.of(calibrationShots, calibrationShots),
      falseDarkShots: errors.falseDark.map((rate) => rate * calibrationShots),
      brightShots: Float64Array.of(calibrationShots, calibrationShots),
    };
    const [first, second] = drawReadoutReplicates(evidence, "up", 11, 40_000).factorMoments;
    const [a, b, c, d] = example.q.map((share) => share * shots);
    const corrected: BootstrapLaw = correctedLaw(pairLaw([a, b, c, d]), first, second);
    // The table holds to first order in 1/n: pairLaw's exact variance differs by 1/n relative, the drawn moments by 5e-4.
    expect(relativeError(corrected.deviation, example.calibratedError)).toBeLessThan(2.5e-3);
    expect(corrected.deviation).toBeGreaterThan(example.knownError * 1.008);
  });
});
