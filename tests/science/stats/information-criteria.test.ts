import { readFileSync } from "node:fs";
import { describe, expect, it } from "vitest";
import { aicc, bic } from "@/lib/science/stats/information-criteria";

const danWood = JSON.parse(readFileSync("tests/fixtures/checks/statistics.json", "utf8")).information_criteria;

describe("information criteria", () => {
  it("give the values worked out for NIST DanWood, with −2 ln L in the place of χ²", () => {
    const misfit = -2 * danWood.powerLogLikelihood;
    expect(aicc(misfit, danWood.powerParameters, danWood.n)).toBeCloseTo(danWood.powerAicc, 9);
    expect(bic(misfit, danWood.powerParameters, danWood.n)).toBeCloseTo(danWood.powerBic, 9);
  });

  it("leave AICc undefined when n ≤ p + 1", () => {
    expect(aicc(1, 2, 3)).toBeNull();
    expect(aicc(1, 2, 4)).toBe(1 + 4 + 12);
  });
});
