import { connectedCorrelators, type CorrelatorEstimator, type UpCounts } from "@/lib/science/correlators/connected-correlators";
import { listPairs } from "@/lib/science/correlators/pairs";
import type { ReadoutCorrection } from "@/lib/science/correlators/readout-correction";
import { pairsOfTrace, type TracePlan } from "@/lib/science/correlators/trace-plan";
import type { TraceSet } from "@/lib/science/front/trace-set";
import type { SweepTime } from "@/lib/science/studies/sweep-time";

/** How the counts become traces. */
export interface SweepReadingChoice {
  plan: TracePlan;
  /** Index among the threshold shifts. */
  shiftIndex: number;
  estimator: CorrelatorEstimator;
  /** With exactly known ε's; null for none. */
  readout: ReadoutCorrection | null;
}

/**
 * Returns the traces of a plan with delta-method standard errors and without replicates. `times` in order of k. A plan of
 * distance averages must be the one that the times were made with.
 */
export function sweepTraces(times: readonly SweepTime[], times_us: Float64Array, { plan, shiftIndex, estimator, readout }: SweepReadingChoice): TraceSet {
  const traces = plan.labels.length;
  const set: TraceSet = {
    labels: plan.labels,
    distances: plan.distances,
    times_us,
    shotsPerTime: Float64Array.from(times, ({ shots }) => shots),
    value: new Float64Array(traces * times.length),
    error: new Float64Array(traces * times.length),
    replicateCount: 0,
    replicates: new Float64Array(0),
  };
  times.forEach(({ readings, shots }, k) => {
    const { counts, distanceVariance, correctedDistanceVariance } = readings[shiftIndex];
    const correlators = connectedCorrelators(counts, estimator, readout);
    const variance = plan.kind === "reference" ? pairVariances(counts, plan, readout) : readout === null ? distanceVariance : correctedDistanceVariance;
    const scale = estimator === "unbiased" ? shots / (shots - 1) : 1;
    for (let q = 0; q < traces; q++) {
      const pairs = pairsOfTrace(plan, q);
      set.value[q * times.length + k] = pairs.reduce((sum, pair) => sum + correlators[pair] / pairs.length, 0);
      set.error[q * times.length + k] = scale * Math.sqrt(variance?.[q] ?? Number.NaN);
    }
  });
  return set;
}

/** Returns the traces of the times from `first` on, without the last `last`. */
export function traceWindow(set: TraceSet, first: number, last: number): TraceSet {
  const times = set.times_us.length;
  const end = times - last;
  const cut = (rows: Float64Array) => Float64Array.from(set.labels.flatMap((_, q) => Array.from(rows.subarray(q * times + first, q * times + end))));
  return {
    ...set,
    times_us: set.times_us.slice(first, end),
    shotsPerTime: set.shotsPerTime.slice(first, end),
    value: cut(set.value),
    error: cut(set.error),
  };
}

function pairVariances(counts: UpCounts, plan: TracePlan, readout: ReadoutCorrection | null): Float64Array {
  const places = listPairs(counts.up.length);
  return Float64Array.from(plan.pairs, (pair) => {
    const [i, j] = [places[2 * pair], places[2 * pair + 1]];
    const factors = readout === null ? 1 : readout.inverseFactor[i] * readout.inverseFactor[j];
    return factors * factors * pairVariance(counts, i, j, pair);
  });
}

/**
 * Returns the squared standard error of a plug-in C = ⟨σ_i σ_j⟩ − ab of ±1 spins with means a and b by the delta method:
 * ((1 − a²)(1 − b²) + 4abC − C²)/M. NaN without shots.
 */
export function pairVariance({ up, bothUp, shots }: UpCounts, i: number, j: number, pair: number): number {
  const a = (2 * up[i]) / shots - 1;
  const b = (2 * up[j]) / shots - 1;
  const c = (4 * (shots * bothUp[pair] - up[i] * up[j])) / (shots * shots);
  return Math.max(0, (1 - a * a) * (1 - b * b) + 4 * a * b * c - c * c) / shots;
}
