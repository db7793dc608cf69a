import { readFileSync } from "node:fs";
import { gunzipSync, strFromU8 } from "fflate";
import { describe, expect, it } from "vitest";
import { analyseTime, type TimeResult } from "@/lib/science/correlators/analyse-time";
import { collectTraces } from "@/lib/science/correlators/collect-traces";
import { packSpins } from "@/lib/science/correlators/packed-spins";
import { pairIndex } from "@/lib/science/correlators/pairs";
import { exactReadoutCorrection, type ReadoutCorrection } from "@/lib/science/correlators/readout-correction";
import { planReferenceTraces, type SitePositions, type TracePlan } from "@/lib/science/correlators/trace-plan";
import { readNpz, type NpzArray } from "@/tests/read-npz";

const RUNS = "tests/fixtures/runs";
const REPLICATES = 500;

/** Written by an independent NumPy program from the same shots. */
interface Expected {
  parameters: { thresholds: number[]; reference: number; readoutCorrection: boolean };
  deterministic: {
    tolerance: number;
    times_us: number[];
    shotsPerTime: number[];
    mean: number[][];
    correlators_at: Record<string, number[][]>;
    traces: number[][];
    distances: number[];
  };
  statistical: { B: number; traceError: number[][] };
  calibration?: { falseBright: number[]; falseDark: number[] };
}

interface Run {
  expected: Expected;
  counts: Uint16Array[];
  positions: SitePositions;
}

function loadRun(name: string): Run {
  const expected = JSON.parse(readFileSync(`${RUNS}/${name}/expected.json`, "utf8")) as Expected;
  if (name === "ragged-drift-8") return { expected, counts: raggedCounts(name, expected), positions: chain(8) };
  const { counts, positions } = readNpz(`${RUNS}/${name}/shots.npz`);
  const [times, shots, sites] = counts.shape;
  const perTime = Array.from({ length: times }, (_, k) =>
    Uint16Array.from(counts.values.subarray(k * shots * sites, (k + 1) * shots * sites)),
  );
  return { expected, counts: perTime, positions: positions === undefined ? chain(sites) : placed(positions) };
}

/** The CSV form: shots with an empty count are set aside. */
function raggedCounts(name: string, expected: Expected): Uint16Array[] {
  const rows = strFromU8(gunzipSync(readFileSync(`${RUNS}/${name}/shots.csv.gz`)))
    .trim()
    .split("\n")
    .slice(1);
  const kept = rows.map((row) => row.split(",")).filter((cells) => cells.every((cell) => /^[0-9.]+\s*$/.test(cell)));
  return expected.deterministic.times_us.map((time) =>
    Uint16Array.from(kept.filter((cells) => Number(cells[0]) === time).flatMap((cells) => cells.slice(2).map(Number))),
  );
}

function chain(sites: number): SitePositions {
  return { x: Float64Array.from({ length: sites }, (_, i) => i), y: null };
}

function placed({ shape, values }: NpzArray): SitePositions {
  const sites = Array.from({ length: shape[0] }, (_, i) => i);
  return {
    x: Float64Array.from(sites, (i) => values[i * shape[1]]),
    y: Float64Array.from(sites, (i) => values[i * shape[1] + 1]),
  };
}

function readoutOf({ parameters, calibration }: Expected): ReadoutCorrection | null {
  if (!parameters.readoutCorrection || calibration === undefined) return null;
  const errors = {
    falseBright: Float64Array.from(calibration.falseBright),
    falseDark: Float64Array.from(calibration.falseDark),
  };
  return exactReadoutCorrection(errors, "up");
}

function analyse({ expected, counts }: Run, plan: TracePlan): TimeResult[] {
  const thresholds = Float64Array.from(expected.parameters.thresholds);
  const readout = readoutOf(expected);
  return counts.map((ofTime, timeIndex) => {
    const spins = packSpins(ofTime, ofTime.length / thresholds.length, thresholds.length, thresholds, "up");
    return analyseTime({
      timeIndex,
      spins,
      estimator: "plug-in",
      readout,
      plan,
      replicates: REPLICATES,
      seed: 12,
      interval: "percentile",
      blockLength: 1,
      pairErrors: "law",
    });
  });
}

function expectRelative(found: number, wanted: number, tolerance: number): void {
  expect(Math.abs(found - wanted)).toBeLessThanOrEqual(tolerance * Math.max(Math.abs(wanted), 1e-3));
}

describe.each(["ising-chain-10", "planar-5x5", "straight-front-24", "xy-chain-12", "ragged-drift-8"])(
  "run %s",
  (name) => {
    const run = loadRun(name);
    const { deterministic, statistical, parameters } = run.expected;
    const plan = planReferenceTraces(run.positions, parameters.reference);
    const results = analyse(run, plan);
    const traces = collectTraces(plan, Float64Array.from(deterministic.times_us), results, REPLICATES);

    it("has the shots, means and correlators an independent program found", () => {
      expect([...traces.shotsPerTime]).toEqual(deterministic.shotsPerTime);
      deterministic.mean.forEach((ofTime, k) =>
        ofTime.forEach((mean, i) => expectRelative(results[k].mean[i], mean, deterministic.tolerance)),
      );
      for (const [k, matrix] of Object.entries(deterministic.correlators_at)) {
        matrix.forEach((row, i) =>
          row.forEach((value, j) => {
            if (i !== j) expectRelative(results[Number(k)].value[pairIndex(matrix.length, i, j)], value, 1e-9);
          }),
        );
      }
    });

    it("has its traces and distances", () => {
      const times = deterministic.times_us.length;
      deterministic.distances.forEach((distance, q) => expectRelative(plan.distances[q], distance, 1e-9));
      deterministic.traces.forEach((ofTrace, q) =>
        ofTrace.forEach((value, k) => expectRelative(traces.value[q * times + k], value, deterministic.tolerance)),
      );
    });

    it("has its trace errors within the noise of both bootstraps", () => {
      const times = deterministic.times_us.length;
      const noise = 7 * Math.sqrt(1 / (2 * statistical.B) + 1 / (2 * REPLICATES));
      let worst = 0;
      statistical.traceError.forEach((ofTrace, q) =>
        ofTrace.forEach((error, k) => {
          const found = traces.error[q * times + k];
          if (error === 0) expect(found).toBe(0);
          else worst = Math.max(worst, Math.abs(found - error) / error);
        }),
      );
      expect(worst).toBeLessThan(noise);
    });
  },
);

describe("collected traces", () => {
  it("come out the same from results in any order, and refuse a missing time", () => {
    const run = loadRun("ragged-drift-8");
    const plan = planReferenceTraces(run.positions, 0);
    const results = analyse(run, plan);
    const times_us = Float64Array.from(run.expected.deterministic.times_us);
    const collected = collectTraces(plan, times_us, results, REPLICATES);
    expect(collectTraces(plan, times_us, [...results].reverse(), REPLICATES)).toEqual(collected);
    expect(() => collectTraces(plan, times_us, results.slice(1), REPLICATES)).toThrow(RangeError);
    expect(() => collectTraces(plan, times_us, [...results.slice(1), results[1]], REPLICATES)).toThrow(RangeError);
  });
});
