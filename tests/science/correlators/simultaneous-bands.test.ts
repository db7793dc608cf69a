import { describe, expect, it } from "vitest";
import { simultaneousBands } from "@/lib/science/correlators/simultaneous-bands";
import type { TraceSet } from "@/lib/science/front/trace-set";
import { createRandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { drawNormal } from "@/lib/science/stats/random-variates";

const TIMES = 20;
const REPLICATES = 500;
const SIGMA = 0.3;

/** One trace of truth 0 with independent normal noise, and replicates with the same noise about it. */
function noisyTrace(seed: number): TraceSet {
  const stream = createRandomStream(seed, RANDOM_PURPOSES.simulation, 2);
  const value = Float64Array.from({ length: TIMES }, () => SIGMA * drawNormal(stream));
  return {
    labels: ["site 1"],
    distances: Float64Array.of(1),
    times_us: Float64Array.from({ length: TIMES }, (_, k) => k),
    shotsPerTime: new Float64Array(TIMES).fill(100),
    value,
    error: new Float64Array(TIMES).fill(SIGMA),
    replicateCount: REPLICATES,
    replicates: Float64Array.from({ length: TIMES * REPLICATES }, (_, at) => value[Math.floor(at / REPLICATES)] + SIGMA * drawNormal(stream)),
  };
}

describe("simultaneous bands", () => {
  // P(max of 20 |z| ≤ c) = 0.95 gives c = Φ⁻¹((1 + 0.95^(1/20))/2) = 3.0162.
  it("reach as many standard errors as the largest of independent normal deviations asks for", () => {
    const factors = Array.from({ length: 20 }, (_, seed) => simultaneousBands(noisyTrace(seed)).factor[0]);
    const mean = factors.reduce((sum, factor) => sum + factor, 0) / factors.length;
    expect(Math.abs(mean - 3.0162)).toBeLessThan(0.06);
  });

  // 300 traces: one standard deviation of the share is 1.3 %; point by point limits would hold 0.95^20 = 36 %.
  it("hold the whole true trace in 95 % of the cases", () => {
    let held = 0;
    for (let seed = 100; seed < 400; seed++) {
      const { low, high } = simultaneousBands(noisyTrace(seed));
      if (low.every((value, at) => value <= 0 && high[at] >= 0)) held += 1;
    }
    expect(Math.abs(held / 300 - 0.95)).toBeLessThan(0.045);
  });

  it("leave samples without spread out", () => {
    const traces = noisyTrace(3);
    traces.error[4] = 0;
    expect(simultaneousBands(traces).factor[0]).toBeLessThan(4);
  });
});
