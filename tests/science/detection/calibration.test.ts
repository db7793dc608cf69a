import { readFileSync } from "node:fs";
import { gunzipSync } from "node:zlib";
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import {
  adviseCalibrationThreshold,
  calibrateSite,
  countAbove,
  type CalibrationCounts,
} from "@/lib/science/detection/calibration";
import { clopperPearson } from "@/lib/science/stats/intervals";

const RUN = "tests/fixtures/runs/ising-chain-10";
const expected = JSON.parse(readFileSync(`${RUN}/expected.json`, "utf8")).calibration;

function readCounts(file: string): Uint16Array {
  const lines = gunzipSync(readFileSync(`${RUN}/${file}`))
    .toString("utf8")
    .trim()
    .split("\n")
    .slice(1);
  return Uint16Array.from(lines.flatMap((line) => line.split(",").slice(2).map(Number)));
}

const simulated: CalibrationCounts = {
  sites: 10,
  dark: readCounts("calibration-dark.csv.gz"),
  bright: readCounts("calibration-bright.csv.gz"),
};

describe("error rates from calibration shots", () => {
  it("are the shares of misread shots that an outside program counted in the simulated run", () => {
    for (let site = 0; site < simulated.sites; site++) {
      const rates = calibrateSite(simulated, site, expected.threshold);
      expect(rates.falseBright).toBeCloseTo(expected.falseBright[site], 14);
      expect(rates.falseDark).toBeCloseTo(expected.falseDark[site], 14);
      expect([rates.evidence.dark.shots, rates.evidence.bright.shots]).toEqual(expected.shots);
      expect(rates.evidence.dark.errors / rates.evidence.dark.shots).toBe(rates.falseBright);
      const { errors, shots } = rates.evidence.bright;
      expect(rates.falseDarkInterval).toEqual(clopperPearson(errors, shots));
    }
  });

  it("count a shot at exactly θ as dark", () => {
    const calibration = { sites: 1, dark: Uint16Array.of(2, 3, 4), bright: Uint16Array.of(3, 4, 5) };
    expect(calibrateSite(calibration, 0, 3)).toMatchObject({ falseBright: 1 / 3, falseDark: 1 / 3 });
    expect(calibrateSite(calibration, 0, 2.5)).toMatchObject({ falseBright: 2 / 3, falseDark: 0 });
  });

  it("compare fractional counts with θ in float32", () => {
    const counts = Float32Array.of(0.1, 0.2);
    // In float64, 0.1 as float32 is above 0.1; in float32 they are equal, so the shot reads dark.
    expect(counts[0] > 0.1).toBe(true);
    expect(countAbove(counts, 1, 0, 0.1)).toBe(1);
  });

  it("never grow for dark shots, and never shrink for bright ones, as θ rises", () => {
    for (let n = 0; n < 15; n++) {
      const lower = calibrateSite(simulated, 3, n + 0.5);
      const higher = calibrateSite(simulated, 3, n + 1.5);
      expect(higher.falseBright).toBeLessThanOrEqual(lower.falseBright);
      expect(higher.falseDark).toBeGreaterThanOrEqual(lower.falseDark);
    }
  });
});

describe("the threshold advised by calibration shots", () => {
  const counts = fc.array(fc.nat(25), { minLength: 1, maxLength: 40 });

  it("is the lowest half-integer with the least sum of both error shares", () => {
    fc.assert(
      fc.property(counts, counts, (dark, bright) => {
        const calibration = { sites: 1, dark: Uint16Array.from(dark), bright: Uint16Array.from(bright) };
        const sum = (threshold: number) =>
          dark.filter((n) => n > threshold).length * bright.length +
          bright.filter((n) => n <= threshold).length * dark.length;
        const candidates = Array.from({ length: 26 }, (_, n) => n + 0.5);
        const least = Math.min(...candidates.map(sum));
        expect(adviseCalibrationThreshold(calibration, 0)).toBe(
          candidates.find((threshold) => sum(threshold) === least),
        );
      }),
    );
  });

  it("lies half-way in the gap for fractional counts, whatever their unit", () => {
    const scaled = (factor: number) => ({
      sites: 1,
      dark: Float32Array.of(-1, 0.5, 1).map((n) => n * factor),
      bright: Float32Array.of(3, 2, 5).map((n) => n * factor),
    });
    expect(adviseCalibrationThreshold(scaled(1), 0)).toBe(1.5);
    expect(adviseCalibrationThreshold(scaled(1 / 1024), 0)).toBe(1.5 / 1024);
  });

  it("separates even neighbouring float32 values", () => {
    const next = 1 + 2 ** -23;
    const calibration = { sites: 1, dark: Float32Array.of(1, 1), bright: Float32Array.of(next, next) };
    expect(calibrateSite(calibration, 0, adviseCalibrationThreshold(calibration, 0))).toMatchObject({
      falseBright: 0,
      falseDark: 0,
    });
  });

  it("exists when all shots count the same", () => {
    const whole = { sites: 1, dark: Uint16Array.of(0), bright: Uint16Array.of(0) };
    const fractional = { sites: 1, dark: Float32Array.of(0.25), bright: Float32Array.of(0.25) };
    expect(adviseCalibrationThreshold(whole, 0)).toBe(0.5);
    expect(adviseCalibrationThreshold(fractional, 0)).toBe(0.25);
  });
});
