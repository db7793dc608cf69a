import {
  connectedCorrelators,
  countUps,
  hasFewFlips,
  jointOutcomes,
  meanSpins,
  type CorrelatorEstimator,
  type UpCounts,
} from "@/lib/science/correlators/connected-correlators";
import { independencePValue, twoSidedPValue } from "@/lib/science/correlators/independence-test";
import { jointReplicates } from "@/lib/science/correlators/joint-error-bars";
import { lawOfMeans, lawOfPairs } from "@/lib/science/correlators/law-error-bars";
import type { PackedSpins } from "@/lib/science/correlators/packed-spins";
import { listPairs, pairCount } from "@/lib/science/correlators/pairs";
import type { ReadoutCorrection } from "@/lib/science/correlators/readout-correction";
import type { IntervalKind } from "@/lib/science/correlators/error-bars";
import { pairsOfTrace, type TracePlan } from "@/lib/science/correlators/trace-plan";

/** Everything the correlators of one evolution time depend on; can be sent to a thread as it is. */
export interface TimeTask {
  timeIndex: number;
  spins: PackedSpins;
  estimator: CorrelatorEstimator;
  readout: ReadoutCorrection | null;
  plan: TracePlan;
  /** 0 gives a preview: values without error bars. */
  replicates: number;
  seed: number;
  interval: IntervalKind;
  /** Consecutive shots that are resampled together, against drift; 1 resamples single shots. */
  blockLength: number;
  /**
   * `law`: errors and intervals of single pairs and of means from their bootstrap law in closed form where it holds, replicates for
   * what is judged jointly. `replicates`: everything from joint replicates, the plain bootstrap. With blocks there is no such law.
   */
  pairErrors: "law" | "replicates";
}

/** Values NaN where they are undefined: all errors and intervals with fewer than two shots or replicates. */
export interface TimeResult {
  timeIndex: number;
  shots: number;
  /** `[site]`, ⟨σ_i⟩ */
  mean: Float64Array;
  /** `[site]` */
  meanError: Float64Array;
  /** `[pair]`, C_ij */
  value: Float64Array;
  error: Float64Array;
  /** `[pair]`, 95 % interval. */
  low: Float64Array;
  high: Float64Array;
  /** `[pair]`, 1 where a joint outcome is expected in fewer than 5 shots: no bootstrap interval covers there. */
  fewFlips: Uint8Array;
  /** `[pair]`, two-sided p-value of C = 0: of the outcomes, or of C/error where blocks of shots are resampled. NaN in a preview. */
  pValue: Float64Array;
  /** `[trace]` */
  traceValue: Float64Array;
  traceError: Float64Array;
  traceLow: Float64Array;
  traceHigh: Float64Array;
  /** `[trace]`, 1 where any of the trace's pairs has few flips. */
  traceFewFlips: Uint8Array;
  /** `[trace][replicate]`, from the same resamples as everything else. */
  traceReplicates: Float64Array;
}

/**
 * Returns means, all connected correlators and traces of one evolution time with their joint bootstrap: whole shots are
 * resampled with replacement, and all sites, pairs and traces of a replicate share the same shots. The result depends
 * on the task alone, to the last bit, whichever thread runs it. With one shot the replicates equal the value, and
 * errors are NaN; without shots everything is NaN. Method and proof: docs/validation.md.
 */
export function analyseTime(task: TimeTask): TimeResult {
  const counts = countUps(task.spins);
  const result = valuesWithoutErrors(task, counts);
  addTraceValues(task, result);
  if (task.replicates === 0) return result;
  if (task.spins.shots < 2) {
    result.traceReplicates.forEach((_, at) => {
      result.traceReplicates[at] = result.traceValue[Math.floor(at / task.replicates)];
    });
    return result;
  }
  const needed = new Uint8Array(pairCount(task.spins.sites)).fill(1);
  if (task.pairErrors === "law" && task.blockLength === 1) {
    lawOfMeans(task, counts, result);
    lawOfPairs(task, counts, result, needed);
  }
  jointReplicates(task, counts, result, needed);
  // Shots that resemble their neighbours hold less than their number says, which a test of the outcomes would not see.
  if (task.blockLength > 1) result.pValue = result.value.map((value, pair) => twoSidedPValue(value / result.error[pair]));
  return result;
}

function valuesWithoutErrors(task: TimeTask, counts: UpCounts): TimeResult {
  const { sites, shots } = task.spins;
  const undefinedRow = (length: number) => new Float64Array(length).fill(Number.NaN);
  const pairs = pairCount(sites);
  const traces = task.plan.distances.length;
  const fewFlips = findFewFlips(counts);
  return {
    timeIndex: task.timeIndex,
    shots,
    mean: meanSpins(counts, task.readout),
    meanError: undefinedRow(sites),
    value: connectedCorrelators(counts, task.estimator, task.readout),
    error: undefinedRow(pairs),
    low: undefinedRow(pairs),
    high: undefinedRow(pairs),
    fewFlips,
    pValue: task.replicates === 0 ? undefinedRow(pairs) : pairPValues(counts),
    traceValue: new Float64Array(traces),
    traceError: undefinedRow(traces),
    traceLow: undefinedRow(traces),
    traceHigh: undefinedRow(traces),
    traceFewFlips: anyOfTrace(task.plan, fewFlips),
    traceReplicates: new Float64Array(traces * task.replicates),
  };
}

function findFewFlips(counts: UpCounts): Uint8Array {
  const pairs = listPairs(counts.up.length);
  return Uint8Array.from(counts.bothUp, (_, pair) =>
    hasFewFlips(jointOutcomes(counts, pairs[2 * pair], pairs[2 * pair + 1], pair)) ? 1 : 0,
  );
}

function pairPValues(counts: UpCounts): Float64Array {
  const pairs = listPairs(counts.up.length);
  return Float64Array.from(counts.bothUp, (_, pair) => independencePValue(jointOutcomes(counts, pairs[2 * pair], pairs[2 * pair + 1], pair)));
}

function anyOfTrace(plan: TracePlan, flags: Uint8Array): Uint8Array {
  return Uint8Array.from(plan.distances, (_, q) => (pairsOfTrace(plan, q).some((pair) => flags[pair] === 1) ? 1 : 0));
}

function addTraceValues({ plan }: TimeTask, result: TimeResult): void {
  plan.distances.forEach((_, q) => {
    const pairs = pairsOfTrace(plan, q);
    for (const pair of pairs) result.traceValue[q] += (1 / pairs.length) * result.value[pair];
  });
}
