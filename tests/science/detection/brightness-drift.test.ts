import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { addToSegments, brightnessDrift, createSegmentSums, driftWarning, type SegmentSums } from "@/lib/science/detection/brightness-drift";
import { createRandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { drawPoisson } from "@/lib/science/stats/random-variates";

/** Sums of one time with two sites: the first steady, the second losing `loss` of its brightness from first to last shot. */
function drifting(shots: number, level: number, loss: number, seed: number): SegmentSums {
  const stream = createRandomStream(seed, RANDOM_PURPOSES.simulation, 14);
  const segments = createSegmentSums(2);
  for (let s = 0; s < shots; s++) {
    const counts = Uint16Array.of(drawPoisson(stream, level), drawPoisson(stream, level * (1 - (loss * s) / shots)));
    addToSegments(segments, counts, 0);
  }
  return segments;
}

describe("the drift of brightness", () => {
  // A linear loss of 10 % makes the later half 5 % dimmer than the earlier one, at a mean of 0.95.
  it("is the difference of the later and the earlier half of the shots, over times of different brightness", () => {
    const times = [3, 8, 5, 11].map((level, seed) => drifting(4000, level, 0.1, seed));
    const [steady, fading] = brightnessDrift(times, 2);
    expect(Math.abs(steady.significance)).toBeLessThan(4);
    expect(Math.abs(fading.change + 0.05 / 0.95)).toBeLessThan(0.012);
    expect(fading.significance).toBeLessThan(-5);
    expect(driftWarning(steady)).toBeNull();
    expect(driftWarning(fading)?.message).toMatch(/^The brightness fell by [456]\.\d %/);
  });

  // 400 sites without drift: significances are standard normal.
  it("is not significant where there is none, more often than chance", () => {
    const found = Array.from({ length: 200 }, (_, seed) => brightnessDrift([drifting(300, 4, 0, seed)], 2)).flat();
    const beyond = found.filter(({ significance }) => Math.abs(significance) > 1.96).length;
    expect(beyond / found.length).toBeGreaterThan(0.02);
    expect(beyond / found.length).toBeLessThan(0.09);
  });

  it("counts every shot once, however many there are", () => {
    fc.assert(
      fc.property(fc.array(fc.integer({ min: 0, max: 500 }), { minLength: 1, maxLength: 300 }), (counts) => {
        const segments = createSegmentSums(1);
        counts.forEach((count) => addToSegments(segments, Uint16Array.of(count), 0));
        const sum = segments.sums.reduce((total, value) => total + value, 0);
        expect(sum).toBe(counts.reduce((total, count) => total + count, 0));
        expect(segments.shots).toBe(counts.length);
        expect(segments.shots).toBeLessThanOrEqual(8 * segments.length);
      }),
    );
  });

  it("is 0 where the counts never change or are too few", () => {
    const constant = createSegmentSums(1);
    for (let s = 0; s < 20; s++) addToSegments(constant, Uint16Array.of(3), 0);
    expect(brightnessDrift([constant, createSegmentSums(1)], 1)).toEqual([{ change: 0, significance: 0 }]);
  });
});
