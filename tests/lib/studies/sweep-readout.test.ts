import { describe, expect, it } from "vitest";
import type { DetectionSite } from "@/db/schema/detections";
import { calibrateSite, type CalibrationCounts } from "@/lib/science/detection/calibration";
import { poissonErrorRates } from "@/lib/science/detection/threshold";
import { shiftedReadoutErrors } from "@/lib/studies/sweep-readout";

const SHIFTS = [-1, 0, 1];
const calibration: CalibrationCounts = { sites: 2, dark: Uint16Array.of(0, 1, 1, 4, 2, 0, 5, 3), bright: Uint16Array.of(9, 3, 7, 8, 4, 12, 3, 5) };

function siteOf(site: number, rates: Partial<DetectionSite>): DetectionSite {
  return { site, threshold: 3.5, falseBright: null, falseDark: null, falseBrightInterval: null, falseDarkInterval: null, fidelity: null, evidence: null, mixture: null, warnings: [], ...rates };
}

const calibrated = [0, 1].map((site) => {
  const { falseBright, falseDark } = calibrateSite(calibration, site, 3.5);
  return siteOf(site, { falseBright, falseDark });
});
const mixture = { dark: 0.5, bright: 10, brightWeight: 0.5 };
const mixed = [0, 1].map((site) => siteOf(site, { ...poissonErrorRates(3.5, 0.5, 10), mixture }));

describe("the error rates of shifted thresholds", () => {
  it("are counted again where the saved ones were counted in calibration shots", () => {
    const [below, saved, above] = shiftedReadoutErrors(calibrated, SHIFTS, calibration);
    // Dark counts of site 0 are 0, 1, 2, 5 and bright ones 9, 7, 4, 3.
    expect(Array.from(below?.falseBright ?? [])[0]).toBe(1 / 4);
    expect(Array.from(saved?.falseDark ?? [])[0]).toBe(1 / 4);
    expect(Array.from(above?.falseDark ?? [])[0]).toBe(2 / 4);
  });

  it("follow the fitted Poisson components where the saved ones do", () => {
    const [below] = shiftedReadoutErrors(mixed, SHIFTS, null);
    expect(below?.falseBright[1]).toBe(poissonErrorRates(2.5, 0.5, 10).falseBright);
  });

  it("are unknown where nothing reproduces the saved ones, which still hold at the saved thresholds", () => {
    const other = mixed.map((site) => ({ ...site, falseDark: 0.2 }));
    const [below, saved, above] = shiftedReadoutErrors(other, SHIFTS, calibration);
    expect([below, above]).toEqual([null, null]);
    expect(saved?.falseDark[0]).toBe(0.2);
  });

  it("are left out where a site is beyond correction or has no rates", () => {
    const beyond = mixed.map((site) => ({ ...site, falseBright: 0.5, falseDark: 0.4 }));
    expect(shiftedReadoutErrors(beyond, [0], null)).toEqual([null]);
    expect(shiftedReadoutErrors([siteOf(0, {})], SHIFTS, null)).toEqual([null, null, null]);
  });
});
