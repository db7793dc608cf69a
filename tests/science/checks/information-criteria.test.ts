import { readFileSync } from "node:fs";
import { describe, expect, it } from "vitest";
import { fitPowerLawInTime } from "@/lib/science/front/power-law-in-time-fit";
import { aicc, bic } from "@/lib/science/stats/information-criteria";
import { fitWeightedLine, fitWeightedLineThroughOrigin } from "@/lib/science/stats/least-squares";
import { publishedChecks } from "./published-checks";

// NIST StRD, DanWood (certified data); criteria of section 10 of the numeric checks, where σ is estimated and counts as a parameter.
const { x: readings, y: responses } = readDanWood();
const { power, line, originLine } = publishedChecks().danWood;
const even = readings.map(() => 1);

function readDanWood(): { x: number[]; y: number[] } {
  const lines = readFileSync("tests/fixtures/checks/nist/DanWood.dat", "utf8").split("\n");
  const rows = lines.map((text) => text.trim().split(/\s+/).map(Number)).filter((row) => row.length === 2 && row.every(Number.isFinite));
  return { x: rows.map((row) => row[1]), y: rows.map((row) => row[0]) };
}

/** −2 ln L of normal residuals with estimated spread. */
function misfit(rss: number): number {
  return readings.length * (Math.log((2 * Math.PI * rss) / readings.length) + 1);
}

describe("AICc and BIC of three models of DanWood", () => {
  it("have the power law's tabulated values, from our own fit", () => {
    const fit = fitPowerLawInTime(Float64Array.from(readings), Float64Array.from(responses), Float64Array.from(even));
    expect(readings).toHaveLength(6);
    expect(aicc(misfit(fit.chiSquare), 3, 6)).toBeCloseTo(power.aicc, 9);
    expect(bic(misfit(fit.chiSquare), 3, 6)).toBeCloseTo(power.bic, 9);
  });

  it("have the straight line's", () => {
    const fit = fitWeightedLine(readings, responses, even);
    expect(fit.intercept).toBeCloseTo(line.intercept, 8);
    expect(fit.slope).toBeCloseTo(line.slope, 8);
    expect(fit.chiSquare).toBeCloseTo(line.rss, 10);
    expect(aicc(misfit(fit.chiSquare), 3, 6)).toBeCloseTo(line.aicc, 9);
  });

  it("have those of the line through the origin", () => {
    const fit = fitWeightedLineThroughOrigin(readings, responses, even);
    expect(fit.slope).toBeCloseTo(originLine.slope, 10);
    expect(aicc(misfit(fit.chiSquare), 2, 6)).toBeCloseTo(originLine.aicc, 9);
  });
});
