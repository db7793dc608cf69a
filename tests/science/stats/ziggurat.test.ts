import { describe, expect, it } from "vitest";
import { createRandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { normalCdf } from "@/lib/science/stats/special-functions";
import { fillWithNormals } from "@/lib/science/stats/ziggurat";

const DRAWS = 400_000;

function draw(seed: number): Float64Array {
  const out = new Float64Array(DRAWS);
  fillWithNormals(out, createRandomStream(seed, RANDOM_PURPOSES.simulation, 0));
  return out;
}

describe("normal draws by the ziggurat", () => {
  const values = draw(1);
  const sorted = values.slice().sort();

  it("have the standard normal distribution", () => {
    let distance = 0;
    sorted.forEach((value, m) => {
      const expected = normalCdf(value);
      distance = Math.max(distance, Math.abs(expected - m / DRAWS), Math.abs(expected - (m + 1) / DRAWS));
    });
    // 99.9 % point of Kolmogorov's statistic.
    expect(distance).toBeLessThan(1.95 / Math.sqrt(DRAWS));
  });

  it("have moments 0, 1, 0, 3 within five standard errors", () => {
    const moment = (power: number) => values.reduce((sum, value) => sum + value ** power, 0) / DRAWS;
    // Variances of x, x², x³, x⁴ of a standard normal variable: 1, 2, 15, 96.
    [0, 1, 0, 3].forEach((expected, at) => expect(Math.abs(moment(at + 1) - expected)).toBeLessThan(5 * Math.sqrt([1, 2, 15, 96][at] / DRAWS)));
  });

  it.each([2.5, 3, 3.5, 4])("reach beyond %d as often as they should, on both sides", (edge) => {
    const expected = DRAWS * normalCdf(-edge);
    for (const side of [-1, 1]) {
      const count = values.filter((value) => side * value > edge).length;
      expect(Math.abs(count - expected)).toBeLessThan(5 * Math.sqrt(expected) + 1);
    }
  });

  it("have no memory: neighbours are uncorrelated", () => {
    let sum = 0;
    for (let m = 1; m < DRAWS; m++) sum += values[m] * values[m - 1];
    expect(Math.abs(sum / DRAWS)).toBeLessThan(5 / Math.sqrt(DRAWS));
  });

  it("are the same for the same stream", () => {
    expect(draw(1)).toEqual(values);
  });
});
