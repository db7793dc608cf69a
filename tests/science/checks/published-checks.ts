import { readFileSync } from "node:fs";

interface Line {
  intercept: number;
  slope: number;
  rss: number;
  aicc: number;
}

/** Published and twice computed values that the tests of this folder share. */
export interface PublishedChecks {
  benjaminiHochberg: { pValues: number[]; adjusted: number[] };
  correlatorErrors: { outcomes: number[]; plugIn: number; unbiased: number; deltaError: number; jackknifeError: number }[];
  unbiasedVariancesOfSix: { shares: number[]; variance: number }[];
  readout: {
    ed: number[];
    eb: number[];
    p_true: number[];
    q: number[];
    meas: number[];
    true: number[];
    shots: number;
    calibrationShots: number;
    rawError: number;
    knownError: number;
    calibratedError: number;
  };
  lawSchool: Record<"biasCorrected90" | "biasCorrected95" | "basic90" | "basic95", [number, number]> & { jackknifeError: number };
  danWood: { power: { aicc: number; bic: number }; line: Line; originLine: { slope: number; aicc: number } };
  exactFronts: { alpha: number | null; crossings: number[]; gamma: number }[];
  besselCrossings: number[];
  besselFits: { from: number; to: number; freeVelocity: number; originVelocity: number; gamma: number }[];
}

/** Returns the values of tests/fixtures/checks/published.json. */
export function publishedChecks(): PublishedChecks {
  return JSON.parse(readFileSync("tests/fixtures/checks/published.json", "utf8")) as PublishedChecks;
}

/** Returns the distance of a value from the truth, as a share of it. */
export function relativeError(value: number, truth: number): number {
  return Math.abs(value / truth - 1);
}
