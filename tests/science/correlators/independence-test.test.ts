import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { independencePValue } from "@/lib/science/correlators/independence-test";
import { createRandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { drawBinomial } from "@/lib/science/stats/random-variates";
import { chiSquareSurvival } from "@/lib/science/stats/special-functions";

describe("the test of C = 0", () => {
  // Fisher's tea-tasting table (1935): of the 70 ways, 1 + 16 + 16 + 1 are at most as probable as three right of four.
  it("is Fisher's exact test where outcomes are rare", () => {
    expect(independencePValue([3, 1, 1, 3])).toBeCloseTo(34 / 70, 12);
    expect(independencePValue([4, 0, 0, 4])).toBeCloseTo(2 / 70, 12);
  });

  it("is Pearson's χ² where they are not", () => {
    const outcomes = [430, 380, 510, 680] as const;
    const shots = 2000;
    const [upI, upJ] = [810, 940];
    const chiSquare = (shots * (430 * 680 - 380 * 510) ** 2) / (upI * (shots - upI) * upJ * (shots - upJ));
    expect(independencePValue(outcomes)).toBeCloseTo(chiSquareSurvival(chiSquare, 1), 12);
  });

  it("finds nothing when a site never flips", () => {
    expect(independencePValue([0, 0, 5, 995])).toBe(1);
  });

  it("does not change when sites or spin directions are exchanged", () => {
    const shots = fc.nat({ max: 60 });
    fc.assert(
      fc.property(shots, shots, shots, shots, (a, b, c, d) => {
        const p = independencePValue([a, b, c, d]);
        if (a + b + c + d === 0) return;
        expect(independencePValue([a, c, b, d])).toBeCloseTo(p, 9);
        expect(independencePValue([d, c, b, a])).toBeCloseTo(p, 9);
        expect(independencePValue([b, a, d, c])).toBeCloseTo(p, 9);
      }),
    );
  });

  // 4000 tests at 5 %: one standard deviation of the share is 0.34 %.
  it("finds 5 % at the 5 % level where there is nothing, and less where outcomes are rare", () => {
    const stream = createRandomStream(21, RANDOM_PURPOSES.simulation, 4);
    const shareFound = (up: number) => {
      let found = 0;
      for (let n = 0; n < 4000; n++) {
        const upI = drawBinomial(stream, 500, up);
        const both = drawBinomial(stream, upI, up);
        const onlyJ = drawBinomial(stream, 500 - upI, up);
        if (independencePValue([both, upI - both, onlyJ, 500 - upI - onlyJ]) <= 0.05) found += 1;
      }
      return found / 4000;
    };
    expect(Math.abs(shareFound(0.4) - 0.05)).toBeLessThan(0.014);
    expect(shareFound(0.05)).toBeLessThan(0.05);
  });
});
