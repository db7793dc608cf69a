import { describe, expect, it } from "vitest";
import {
  connectedCorrelators,
  countUps,
  hasFewFlips,
  jointOutcomes,
  meanSpins,
  spinVariances,
  type UpCounts,
} from "@/lib/science/correlators/connected-correlators";
import { exactReadoutCorrection } from "@/lib/science/correlators/readout-correction";
import { plainCorrelator, plainMean } from "@/tests/science/correlators/plain-bootstrap";
import { correlatedSpins, packShots } from "@/tests/science/correlators/spin-samples";

/** Two sites with the joint outcomes ++, +−, −+, −−. */
function twoSites(outcomes: number[]): UpCounts {
  const [both, onlyI, onlyJ, neither] = outcomes;
  return {
    shots: both + onlyI + onlyJ + neither,
    up: Uint32Array.of(both + onlyI, both + onlyJ),
    bothUp: Uint32Array.of(both),
  };
}

describe("connected correlators", () => {
  // Hand values: Ĉ = mean(xy) − x̄ȳ and its n/(n − 1) multiple.
  it.each([
    { outcomes: [400, 100, 200, 300], plugIn: 0.4, unbiased: 0.4004004004 },
    { outcomes: [520, 110, 130, 240], plugIn: 0.442, unbiased: 0.4424424424 },
    { outcomes: [250, 250, 250, 250], plugIn: 0, unbiased: 0 },
    { outcomes: [0, 0, 5, 995], plugIn: 0, unbiased: 0 },
  ])("of outcomes $outcomes are $plugIn, unbiased $unbiased", ({ outcomes, plugIn, unbiased }) => {
    expect(connectedCorrelators(twoSites(outcomes), "plug-in", null)[0]).toBeCloseTo(plugIn, 14);
    expect(connectedCorrelators(twoSites(outcomes), "unbiased", null)[0]).toBeCloseTo(unbiased, 10);
  });

  it("of a site that never flips are exactly zero", () => {
    const counts = countUps(packShots(correlatedSpins(77, 4, 3, 2)));
    const value = connectedCorrelators(counts, "plug-in", null);
    expect([value[1], value[3], value[5]]).toEqual([0, 0, 0]);
  });

  it("agree with averages over plain spins, for all sites and pairs", () => {
    const spins = correlatedSpins(133, 6, 11);
    const ones = spins.map(() => 1);
    const counts = countUps(packShots(spins));
    const value = connectedCorrelators(counts, "plug-in", null);
    let pair = 0;
    for (let i = 0; i < 6; i++) {
      expect(meanSpins(counts, null)[i]).toBeCloseTo(plainMean(spins, ones, i), 14);
      for (let j = i + 1; j < 6; j++) expect(value[pair++]).toBeCloseTo(plainCorrelator(spins, ones, i, j), 14);
    }
  });

  // Inverting the 4 × 4 matrix of two independent readout channels gives .04, −.04 and .6016 from these outcomes.
  it("are freed of readout errors", () => {
    const counts = twoSites([374314, 134886, 97086, 393714]);
    const errors = { falseBright: Float64Array.of(0.01, 0.025), falseDark: Float64Array.of(0.03, 0.045) };
    const readout = exactReadoutCorrection(errors, "up");
    const mean = meanSpins(counts, readout);
    expect(mean[0]).toBeCloseTo(0.04, 12);
    expect(mean[1]).toBeCloseTo(-0.04, 12);
    expect(connectedCorrelators(counts, "plug-in", readout)[0]).toBeCloseTo(0.6016, 12);
    expect(spinVariances(mean)[0]).toBeCloseTo(1 - 0.04 ** 2, 12);
  });

  it("change sign of the mean, not of C, when bright is down", () => {
    const counts = twoSites([393714, 97086, 134886, 374314]);
    const errors = { falseBright: Float64Array.of(0.01, 0.025), falseDark: Float64Array.of(0.03, 0.045) };
    const readout = exactReadoutCorrection(errors, "down");
    expect(meanSpins(counts, readout)[0]).toBeCloseTo(-0.04, 12);
    expect(connectedCorrelators(counts, "plug-in", readout)[0]).toBeCloseTo(0.6016, 12);
  });

  it("of one shot are 0, and undefined when unbiased; of none undefined", () => {
    expect(connectedCorrelators(twoSites([1, 0, 0, 0]), "plug-in", null)[0]).toBe(0);
    expect(connectedCorrelators(twoSites([1, 0, 0, 0]), "unbiased", null)[0]).toBeNaN();
    expect(connectedCorrelators(twoSites([0, 0, 0, 0]), "plug-in", null)[0]).toBeNaN();
  });
});

describe("joint outcomes", () => {
  it("are found from the up counts, few below five", () => {
    expect(jointOutcomes(twoSites([7, 5, 6, 8]), 0, 1, 0)).toEqual([7, 5, 6, 8]);
    expect(hasFewFlips([7, 5, 6, 8])).toBe(false);
    expect(hasFewFlips([7, 5, 4, 8])).toBe(true);
  });
});
