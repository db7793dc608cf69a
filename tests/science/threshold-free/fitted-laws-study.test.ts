import { expect, it } from "vitest";
import { fittedLawStudy, fittedLawTable } from "@/scripts/study/fitted-laws";

it("laws fitted to the run's own counts leave the estimate without thresholds near the truth, its intervals near their level", () => {
  const rows = fittedLawStudy(3, 150, [{ dark: 3, bright: 9, leakage: 0, correlator: 0.4, shots: 500, pooledShots: 5000 }]);
  const [{ soft, threshold, fitted }] = rows;
  expect(fitted).toBe(1);
  expect(Math.abs(soft.bias)).toBeLessThan((4 * soft.rms) / Math.sqrt(150));
  // 150 repeats know a coverage of 95 % to 1.8 %; four times that.
  expect(Math.abs(soft.coverage - 0.95)).toBeLessThan(0.072);
  expect(soft.rms).toBeLessThan(threshold.rms);
  expect(fittedLawTable(rows)).toContain("| 3 / 9 | 0.0 % | 0.4 | 500 | 5000 | 100.0 % |");
});
