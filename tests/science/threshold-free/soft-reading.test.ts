import { describe, expect, it } from "vitest";
import { createRandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { drawPoisson } from "@/lib/science/stats/random-variates";
import { analyseTimeSoftly } from "@/lib/science/threshold-free/analyse-time-softly";
import { planReferenceTraces } from "@/lib/science/correlators/trace-plan";
import { poissonCountLaw, poissonCountLaws } from "@/lib/science/threshold-free/count-laws";
import { mostLikelyCorrelators } from "@/lib/science/threshold-free/most-likely-correlators";
import { readSoftly } from "@/lib/science/threshold-free/soft-reading";
import { softenCounts } from "@/lib/science/threshold-free/soft-spins";
import { correlatedSpins } from "@/tests/science/correlators/spin-samples";

const COMPONENTS = [
  { dark: 1, bright: 9, brightWeight: 0.4 },
  { dark: 2, bright: 8, brightWeight: 0.4 },
  { dark: 3, bright: 9, brightWeight: 0.4 },
];
const LAWS = COMPONENTS.map(poissonCountLaw);

describe("a reading without thresholds", () => {
  it("has the weights of every site", () => {
    const reading = readSoftly(LAWS, "down");
    if (reading.kind === "refused") throw new Error(reading.message);
    expect(reading.weights.map(({ length }) => length)).toEqual(LAWS.map(({ dark }) => dark.length));
    expect(reading.weights[0][0]).toBeGreaterThan(0.99);
    expect(reading.retained[0]).toBeGreaterThan(reading.retained[1]);
    expect(reading.retained[1]).toBeGreaterThan(reading.retained[2]);
  });

  it("is refused, by site, where no components were fitted or they nearly coincide", () => {
    const laws = poissonCountLaws([{ mixture: COMPONENTS[0] }, { mixture: null }, { mixture: { dark: 3, bright: 3.4, brightWeight: 0.5 } }]);
    const refusal = readSoftly(laws, "up");
    expect(refusal).toMatchObject({ kind: "refused", sites: [1, 2] });
  });
});

describe("the most likely correlators of all pairs", () => {
  it("agree with the soft spins' within what the two estimates differ by, pair by pair and with sites of different laws", () => {
    const shots = 20000;
    const stream = createRandomStream(3, RANDOM_PURPOSES.simulation, 1);
    const counts = Uint16Array.from(correlatedSpins(shots, 3, 2).flat(), (spin, at) => drawPoisson(stream, spin === 1 ? COMPONENTS[at % 3].bright : COMPONENTS[at % 3].dark));
    const { value, error, unfinished } = mostLikelyCorrelators(counts, LAWS, "up");
    const reading = readSoftly(LAWS, "up");
    if (reading.kind === "refused") throw new Error(reading.message);
    const plan = planReferenceTraces({ x: Float64Array.of(0, 1, 2), y: null }, 0);
    const spins = softenCounts(counts, shots, 3, reading.weights);
    const soft = analyseTimeSoftly({ timeIndex: 0, spins, plan, estimator: "plug-in", replicates: 100, seed: 1, interval: "percentile", blockLength: 1, pairErrors: "law", lawReplicates: null });
    value.forEach((c, pair) => expect(Math.abs(c - soft.value[pair])).toBeLessThan(error[pair]));
    error.forEach((e, pair) => expect(e / soft.error[pair]).toBeGreaterThan(0.8));
    error.forEach((e, pair) => expect(e / soft.error[pair]).toBeLessThan(1.02));
    expect(Array.from(unfinished)).toEqual([0, 0, 0]);
  });
});
