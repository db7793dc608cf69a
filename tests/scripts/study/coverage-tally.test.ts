import { describe, expect, it } from "vitest";
import { clopperPearson } from "@/lib/science/stats/intervals";
import { addRepeat, coverageLimits, coverageOf, coverageText, emptyTally, mergeTallies, type Estimate } from "@/scripts/study/coverage-tally";

const around = (value: number): Estimate => ({ value, error: 0.5, low: value - 1, high: value + 1 });
const repeatOf = (...values: number[]) => values.map((value) => ({ estimate: around(value), truth: 0 }));

describe("a tally of intervals", () => {
  it("counts those that hold the truth, those below and those above", () => {
    const tally = emptyTally();
    for (const value of [0, 0.9, -1, 1.5, -3]) addRepeat(tally, repeatOf(value));
    expect(tally).toMatchObject({ repeats: 5, intervals: 5, held: 3, below: 1, above: 1 });
    expect(tally.sum).toBeCloseTo(-1.6, 12);
    expect(coverageOf(tally)).toBe(0.6);
    expect(coverageLimits(tally)).toEqual(clopperPearson(3, 5));
    expect(coverageText(tally)).toBe("60.0 (14.7–94.7)");
  });

  it("is the sum of its parts, and a dash when empty", () => {
    const [whole, first, second] = [emptyTally(), emptyTally(), emptyTally()];
    [repeatOf(0, 2), repeatOf(1.2), repeatOf(-0.4, 0.1, 5)].forEach((repeat, n) => {
      addRepeat(whole, repeat);
      addRepeat(n === 0 ? first : second, repeat);
    });
    expect(mergeTallies(first, second)).toEqual(whole);
    expect(coverageText(emptyTally())).toBe("–");
  });

  it("takes intervals that hold or fail together, four to a repeat, for one trial", () => {
    const tally = emptyTally();
    for (let n = 0; n < 100; n++) addRepeat(tally, repeatOf(...new Array<number>(4).fill(n < 90 ? 0 : 2)));
    const [low, high] = coverageLimits(tally);
    const [lowOfRepeats, highOfRepeats] = clopperPearson(90, 100);
    expect(low).toBeCloseTo(lowOfRepeats, 9);
    expect(high).toBeCloseTo(highOfRepeats, 9);
  });
});
