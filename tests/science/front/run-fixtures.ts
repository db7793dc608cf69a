import { readFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import type { TraceSet } from "@/lib/science/front/trace-set";

export const RUN_NAMES = ["ising-chain-10", "planar-5x5", "ragged-drift-8", "straight-front-24", "xy-chain-12"];

/** What an independent NumPy program found for a simulated run. */
export interface ExpectedRun {
  deterministic: {
    times_us: number[];
    shotsPerTime: number[];
    traces: number[][];
    distances: number[];
    crossing_isotonic_us: (number | null)[];
    crossing_first_us: (number | null)[];
  };
  statistical: {
    traceError: number[][];
    status: string[];
    crossing_us: (number | null)[];
    crossingError_us: (number | null)[];
    linear: Record<
      "t0_us" | "v_sites_per_us" | "t0_error" | "v_error" | "n" | "chi2" | "dof" | "p_value" | "aicc" | "bic",
      number
    >;
    powerLaw: Record<
      "gamma" | "gamma_error" | "beta" | "beta_error" | "a" | "n" | "chi2" | "dof" | "p_value" | "aicc" | "bic",
      number
    >;
    gammaInterval: [number, number];
    verdict: string;
  };
}

export function expectedRun(name: string): ExpectedRun {
  const path = fileURLToPath(new URL(`../../fixtures/runs/${name}/expected.json`, import.meta.url));
  return JSON.parse(readFileSync(path, "utf8")) as ExpectedRun;
}

/** The expected traces and errors of a run as a trace set without replicates. */
export function traceSetOfRun({ deterministic, statistical }: ExpectedRun): TraceSet {
  return traceSetOf({
    times_us: deterministic.times_us,
    shotsPerTime: deterministic.shotsPerTime,
    distances: deterministic.distances,
    value: deterministic.traces,
    error: statistical.traceError,
  });
}

/** A trace set from nested arrays; `replicates` is `[replicate][trace][k]`. */
export function traceSetOf(given: {
  times_us: number[];
  distances: number[];
  value: number[][];
  error?: number[][];
  shotsPerTime?: number[];
  replicates?: number[][][];
}): TraceSet {
  const { times_us, distances, value, replicates = [] } = given;
  const packed = new Float64Array(times_us.length * distances.length * replicates.length);
  replicates.forEach((traces, b) =>
    traces.forEach((samples, j) =>
      samples.forEach((sample, k) => {
        packed[(k * distances.length + j) * replicates.length + b] = sample;
      }),
    ),
  );
  return {
    labels: distances.map((_, j) => `site ${j + 1}`),
    distances: Float64Array.from(distances),
    times_us: Float64Array.from(times_us),
    shotsPerTime: Float64Array.from(given.shotsPerTime ?? times_us.map(() => 1000)),
    value: Float64Array.from(value.flat()),
    error: Float64Array.from((given.error ?? value.map((samples) => samples.map(() => 0.001))).flat()),
    replicateCount: replicates.length,
    replicates: packed,
  };
}
