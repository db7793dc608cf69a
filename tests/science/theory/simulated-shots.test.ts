import { describe, expect, it } from "vitest";
import { createRandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { gaussianSurrogate } from "@/lib/science/theory/gaussian-surrogate";
import { drawIndex, measureCounts } from "@/lib/science/theory/measured-counts";

const SHOTS = 40_000;
/** Five standard errors of a mean of ±1 over the shots. */
const MARGIN = 5 / Math.sqrt(SHOTS);

function streamOf(index: number) {
  return createRandomStream(7, RANDOM_PURPOSES.simulation, index);
}

describe("shots drawn from a distribution", () => {
  it("come as often as their chances say, and never where the chance is zero", () => {
    const cumulative = Float64Array.of(0, 0.1, 0.1, 0.7, 1);
    const stream = streamOf(0);
    const seen = new Float64Array(5);
    for (let s = 0; s < SHOTS; s++) seen[drawIndex(cumulative, stream)] += 1 / SHOTS;
    expect(seen[0]).toBe(0);
    expect(seen[2]).toBe(0);
    expect(Math.abs(seen[1] - 0.1)).toBeLessThan(MARGIN);
    expect(Math.abs(seen[3] - 0.6)).toBeLessThan(MARGIN);
    expect(Math.abs(seen[4] - 0.3)).toBeLessThan(MARGIN);
  });
});

describe("the Gaussian surrogate", () => {
  // Sheppard 1899: the signs of two normal variables of correlation ρ have the correlation (2/π) asin ρ.
  it.each([1, 2, 3, 5])("has unbiased spins whose correlator at distance %d is Sheppard's", (distance) => {
    const draw = gaussianSurrogate(6, 2.5);
    const stream = streamOf(distance);
    let mean = 0;
    let together = 0;
    for (let s = 0; s < SHOTS; s++) {
      const up = draw(stream);
      mean += (up[0] ? 1 : -1) / SHOTS;
      together += (up[0] === up[distance] ? 1 : -1) / SHOTS;
    }
    const expected = (2 / Math.PI) * Math.asin(0.999 * Math.exp(-((distance / 2.5) ** 2)));
    expect(Math.abs(mean)).toBeLessThan(MARGIN);
    expect(Math.abs(together - expected)).toBeLessThan(MARGIN);
  });
});

describe("simulated counts", () => {
  const mean = (up: boolean, darkLeak: number, brightLeak: number) => {
    const detector = { dark: Float64Array.of(1), bright: Float64Array.of(12), darkLeak, brightLeak };
    const stream = streamOf(100);
    let sum = 0;
    for (let s = 0; s < SHOTS; s++) sum += measureCounts([up], detector, stream)[0];
    return sum / SHOTS;
  };
  // Five standard errors of a mean of counts whose variance is below 40.
  const countMargin = 5 * Math.sqrt(40 / SHOTS);

  it("have the site's own mean, dark or bright", () => {
    expect(Math.abs(mean(false, 0, 0) - 1)).toBeLessThan(countMargin);
    expect(Math.abs(mean(true, 0, 0) - 12)).toBeLessThan(countMargin);
  });

  it("move half-way to the other state where every shot leaks at a uniform moment", () => {
    expect(Math.abs(mean(false, 1, 0) - 6.5)).toBeLessThan(countMargin);
    expect(Math.abs(mean(true, 0, 1) - 6.5)).toBeLessThan(countMargin);
  });
});
