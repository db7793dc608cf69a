import { describe, expect, it } from "vitest";
import {
  drawReadoutReplicates,
  sitesPoorlyKnown,
  exactReadoutCorrection,
  readoutFactors,
  sitesBeyondCorrection,
} from "@/lib/science/correlators/readout-correction";
import { mean, standardDeviation } from "@/lib/science/stats/intervals";

const REPLICATES = 4000;

describe("readout errors that few calibration shots leave open", () => {
  const evidenceOf = (shots: number) => ({
    falseBrightShots: Float64Array.of(0.05 * shots, 0.3 * shots),
    darkShots: Float64Array.of(shots, shots),
    falseDarkShots: Float64Array.of(0.05 * shots, 0.35 * shots),
    brightShots: Float64Array.of(shots, shots),
  });

  it("are named by site when a replicate's F comes near zero, and sound with more shots", () => {
    expect(sitesPoorlyKnown(drawReadoutReplicates(evidenceOf(40), "up", 3, 1000))).toEqual([1]);
    expect(sitesPoorlyKnown(drawReadoutReplicates(evidenceOf(4000), "up", 3, 1000))).toEqual([]);
  });
});

describe("the readout correction", () => {
  it("refuses sites whose F is not above 0.2, by name", () => {
    const errors = {
      falseBright: Float64Array.of(0.1, 0.5, 0.4, Number.NaN),
      falseDark: Float64Array.of(0.1, 0.3, 0.3, 0),
    };
    expect(readoutFactors(errors)[0]).toBeCloseTo(0.8, 15);
    expect(sitesBeyondCorrection(errors)).toEqual([1, 3]);
    expect(() => exactReadoutCorrection(errors, "up")).toThrow("1, 3");
  });

  it("draws ε from Beta(x + ½, K − x + ½), the same again for the same seed, others for other sites", () => {
    const evidence = {
      falseBrightShots: Float64Array.of(76, 76),
      darkShots: Float64Array.of(2000, 2000),
      falseDarkShots: Float64Array.of(0, 0),
      brightShots: Float64Array.of(500, 500),
    };
    const drawn = drawReadoutReplicates(evidence, "up", 5, REPLICATES);
    expect(drawReadoutReplicates(evidence, "up", 5, REPLICATES)).toEqual(drawn);
    const first = drawn.offset.subarray(0, REPLICATES);
    expect(drawn.offset.subarray(REPLICATES)).not.toEqual(first);
    // Beta means and variances: a/(a+b), ab/((a+b)²(a+b+1)).
    const expected = 76.5 / 2001 - 0.5 / 501;
    const spread = Math.sqrt((76.5 * 1924.5) / (2001 ** 2 * 2002) + (0.5 * 500.5) / (501 ** 2 * 502));
    expect(Math.abs(mean(first) - expected)).toBeLessThan((5 * spread) / Math.sqrt(REPLICATES));
    expect(standardDeviation(first) / spread).toBeGreaterThan(0.93);
    expect(standardDeviation(first) / spread).toBeLessThan(1.07);
  });

  it("turns the offset round when bright is down", () => {
    const evidence = {
      falseBrightShots: Float64Array.of(76),
      darkShots: Float64Array.of(2000),
      falseDarkShots: Float64Array.of(3),
      brightShots: Float64Array.of(500),
    };
    const up = drawReadoutReplicates(evidence, "up", 5, 10);
    const down = drawReadoutReplicates(evidence, "down", 5, 10);
    expect(down.offset).toEqual(up.offset.map((offset) => -offset));
    expect(down.inverseFactor).toEqual(up.inverseFactor);
  });
});
