import { describe, expect, it } from "vitest";
import { thresholdFreeStudy, thresholdFreeSummary, thresholdFreeTable } from "@/scripts/study/threshold-free";

const CLEAR = { dark: 1, bright: 12, mean: 0, correlator: 0.1, shots: 250 };
const OVERLAPPING = { dark: 4, bright: 8, mean: -0.6, correlator: 0, shots: 250 };

describe("the study of estimates without thresholds", () => {
  const rows = thresholdFreeStudy(2, 400, [CLEAR, OVERLAPPING]);

  it("finds no difference where the counts are clear, and a fifth less error or more where one shot in five is misread", () => {
    const [clear, overlapping] = rows;
    expect(clear.readoutError).toBeLessThan(0.01);
    expect(Math.abs(clear.soft.rms / clear.threshold.rms - 1)).toBeLessThan(0.02);
    expect(overlapping.readoutError).toBeGreaterThan(0.2);
    expect(overlapping.soft.rms).toBeLessThan(0.8 * overlapping.threshold.rms);
    expect(overlapping.likelihood.rms).toBeLessThan(0.8 * overlapping.threshold.rms);
    expect(overlapping.retained).toBeGreaterThan(overlapping.retainedByThreshold);
  });

  it("finds intervals that hold the truth in about 95 % of the repeats", () => {
    // 400 repeats know a coverage of 95 % to 1.1 %; four times that.
    for (const { threshold, soft } of rows) {
      expect(Math.abs(threshold.coverage - 0.95)).toBeLessThan(0.044);
      expect(Math.abs(soft.coverage - 0.95)).toBeLessThan(0.044);
    }
  });

  it("is summed up by rates and ⟨σ⟩, with the range over the rest", () => {
    const [, , line, ...rest] = thresholdFreeSummary([rows[1], { ...rows[1], shots: 500, soft: rows[1].threshold }]).split("\n");
    expect(rest).toEqual([]);
    expect(line).toContain(`| 4 / 8 | 20.3 % | -0.6 | ${(rows[1].soft.rms / rows[1].threshold.rms).toFixed(3)} to 1.000 |`);
  });

  it("is the same again under the same seed, and prints one line a row", () => {
    expect(thresholdFreeStudy(2, 20, [OVERLAPPING])).toEqual(thresholdFreeStudy(2, 20, [OVERLAPPING]));
    expect(thresholdFreeTable(rows).split("\n")).toHaveLength(4);
    expect(thresholdFreeTable(rows)).toContain("| 4 / 8 | 20.3 % | -0.6 | 0 | 250 |");
  });
});
