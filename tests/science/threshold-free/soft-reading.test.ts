import { describe, expect, it } from "vitest";
import { createRandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { drawPoisson } from "@/lib/science/stats/random-variates";
import { analyseTimeSoftly } from "@/lib/science/threshold-free/analyse-time-softly";
import { planReferenceTraces } from "@/lib/science/correlators/trace-plan";
import { mostLikelyCorrelators } from "@/lib/science/threshold-free/most-likely-correlators";
import { poissonCountModel, readSoftly, type SoftReading } from "@/lib/science/threshold-free/soft-reading";
import { softenCounts } from "@/lib/science/threshold-free/soft-spins";
import { correlatedSpins } from "@/tests/science/correlators/spin-samples";

const COMPONENTS = [
  { dark: 1, bright: 9, brightWeight: 0.4, darkError: 0.02, brightError: 0.05 },
  { dark: 2, bright: 8, brightWeight: 0.4, darkError: 0, brightError: 0 },
  { dark: 3, bright: 9, brightWeight: 0.4, darkError: 0.02, brightError: 0.05 },
];

function readingOf(brightIs: "up" | "down"): SoftReading {
  const reading = readSoftly(COMPONENTS.map(poissonCountModel), brightIs);
  if (reading.kind === "refused") throw new Error(reading.message);
  return reading;
}

describe("a reading without thresholds", () => {
  it("has the weights of every site, and how well they are known", () => {
    const reading = readingOf("down");
    expect(reading.weights.map(({ length }) => length)).toEqual(reading.laws.map(({ dark }) => dark.length));
    expect(reading.weights[0][0]).toBeGreaterThan(0.99);
    expect(reading.retained[0]).toBeGreaterThan(reading.retained[1]);
    expect(reading.retained[1]).toBeGreaterThan(reading.retained[2]);
    expect(reading.meanErrors[0].dark).toBeGreaterThan(0);
    expect(reading.meanErrors[1]).toEqual({ dark: 0, bright: 0 });
  });

  it("is refused, by site, where no components were fitted or they nearly coincide", () => {
    const mixtures = [COMPONENTS[0], null, { ...COMPONENTS[0], dark: 3, bright: 3.4 }];
    expect(readSoftly(mixtures.map(poissonCountModel), "up")).toMatchObject({ kind: "refused", sites: [1, 2] });
  });
});

describe("the most likely correlators of all pairs", () => {
  it("agree with the soft spins' within what the two estimates differ by, pair by pair and with sites of different laws", () => {
    const shots = 20000;
    const stream = createRandomStream(3, RANDOM_PURPOSES.simulation, 1);
    const counts = Uint16Array.from(correlatedSpins(shots, 3, 2).flat(), (spin, at) => drawPoisson(stream, spin === 1 ? COMPONENTS[at % 3].bright : COMPONENTS[at % 3].dark));
    const { laws, weights } = readingOf("up");
    const { value, error, unfinished } = mostLikelyCorrelators(counts, laws, "up");
    const plan = planReferenceTraces({ x: Float64Array.of(0, 1, 2), y: null }, 0);
    const spins = softenCounts(counts, shots, 3, weights);
    const soft = analyseTimeSoftly({ timeIndex: 0, spins, plan, estimator: "plug-in", replicates: 100, seed: 1, interval: "percentile", blockLength: 1, pairErrors: "law", lawReplicates: null });
    value.forEach((c, pair) => expect(Math.abs(c - soft.value[pair])).toBeLessThan(error[pair]));
    error.forEach((e, pair) => expect(e / soft.error[pair]).toBeGreaterThan(0.8));
    error.forEach((e, pair) => expect(e / soft.error[pair]).toBeLessThan(1.02));
    expect(Array.from(unfinished)).toEqual([0, 0, 0]);
  });
});
