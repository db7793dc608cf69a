import {
  connectedCorrelators,
  correlatorScale,
  countUps,
  hasFewFlips,
  jointOutcomes,
  meanSpins,
  type CorrelatorEstimator,
  type UpCounts,
} from "@/lib/science/correlators/connected-correlators";
import { pairAcceleration, sumAcceleration } from "@/lib/science/correlators/jackknife-acceleration";
import {
  countReplicates,
  prepareJointBootstrap,
  siteRow,
  type CountedPair,
  type JointBootstrap,
} from "@/lib/science/correlators/joint-bootstrap";
import type { PackedSpins } from "@/lib/science/correlators/packed-spins";
import { listPairs, pairCount } from "@/lib/science/correlators/pairs";
import type { ReadoutCorrection } from "@/lib/science/correlators/readout-correction";
import { errorBarOf, type IntervalKind } from "@/lib/science/correlators/error-bars";
import type { TracePlan } from "@/lib/science/correlators/trace-plan";

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

/** A pair's part in a trace. */
interface TraceShare {
  trace: number;
  share: number;
}

/** One evolution time while it is being analysed. */
interface Work {
  task: TimeTask;
  run: JointBootstrap;
  counts: UpCounts;
  result: TimeResult;
  sharesOfPair: Map<number, TraceShare[]>;
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
  const sharesOfPair = tracesOfPairs(task.plan);
  addTraceValues(task, result);
  if (task.replicates === 0) return result;
  if (task.spins.shots < 2) {
    result.traceReplicates.forEach((_, at) => {
      result.traceReplicates[at] = result.traceValue[Math.floor(at / task.replicates)];
    });
    return result;
  }
  const traces = task.plan.distances.length;
  const run = prepareJointBootstrap(task.spins, task.readout, task.replicates, task.seed, task.timeIndex, traces);
  const work = { task, run, counts, result, sharesOfPair };
  countReplicates(run, (pairs) => pairs.forEach((pair) => analysePair(work, pair)));
  analyseMeans(work);
  analyseTraces(work);
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

function anyOfTrace(plan: TracePlan, flags: Uint8Array): Uint8Array {
  return Uint8Array.from(plan.distances, (_, q) => (pairsOfTrace(plan, q).some((pair) => flags[pair] === 1) ? 1 : 0));
}

function pairsOfTrace(plan: TracePlan, q: number): Uint32Array {
  return plan.pairs.subarray(plan.offsets[q], plan.offsets[q + 1]);
}

function tracesOfPairs(plan: TracePlan): Map<number, TraceShare[]> {
  const sharesOfPair = new Map<number, TraceShare[]>();
  plan.distances.forEach((_, trace) => {
    const pairs = pairsOfTrace(plan, trace);
    for (const pair of pairs) {
      const shares = sharesOfPair.get(pair) ?? [];
      shares.push({ trace, share: 1 / pairs.length });
      sharesOfPair.set(pair, shares);
    }
  });
  return sharesOfPair;
}

function addTraceValues({ plan }: TimeTask, result: TimeResult): void {
  plan.distances.forEach((_, q) => {
    const pairs = pairsOfTrace(plan, q);
    for (const pair of pairs) result.traceValue[q] += (1 / pairs.length) * result.value[pair];
  });
}

function analysePair({ task, run, counts, result, sharesOfPair }: Work, { i, j, pair, bothUp }: CountedPair): void {
  const { kernel, layout } = run;
  const { shots, replicates, values, valueBytes, factors } = layout;
  const scale = correlatorScale(shots, task.estimator);
  const factorI = factors + i * valueBytes;
  const factorJ = factors + j * valueBytes;
  kernel.correlate(bothUp, siteRow(layout, i), siteRow(layout, j), factorI, factorJ, shots, scale, replicates, values);
  const acceleration = task.interval === "bca" ? pairAcceleration(jointOutcomes(counts, i, j, pair)) : null;
  const bar = errorBarOf(kernel, layout, values, result.value[pair], acceleration);
  result.error[pair] = bar.error;
  result.low[pair] = bar.low;
  result.high[pair] = bar.high;
  for (const { trace, share } of sharesOfPair.get(pair) ?? []) {
    kernel.addShare(values, share, replicates, layout.traces + trace * valueBytes);
  }
}

function analyseMeans({ task, run, result }: Work): void {
  const { kernel, layout } = run;
  const { shots, replicates, values, valueBytes } = layout;
  for (let i = 0; i < task.spins.sites; i++) {
    const factor = layout.factors + i * valueBytes;
    const offset = layout.offsets + i * valueBytes;
    kernel.average(siteRow(layout, i), factor, offset, shots, replicates, values);
    result.meanError[i] = replicates < 2 ? Number.NaN : kernel.spread(values, replicates);
  }
}

function analyseTraces(work: Work): void {
  const { task, run, result } = work;
  const { kernel, layout } = run;
  task.plan.distances.forEach((_, q) => {
    const row = layout.traces + q * layout.valueBytes;
    const acceleration = task.interval === "bca" ? traceAcceleration(work, q) : null;
    const bar = errorBarOf(kernel, layout, row, result.traceValue[q], acceleration);
    result.traceError[q] = bar.error;
    result.traceLow[q] = bar.low;
    result.traceHigh[q] = bar.high;
    const replicates = new Float64Array(kernel.memory.buffer, row, task.replicates);
    result.traceReplicates.set(replicates, q * task.replicates);
  });
}

function traceAcceleration({ task, counts }: Work, q: number): number {
  const pairs = pairsOfTrace(task.plan, q);
  const sitesOfAll = listPairs(task.spins.sites);
  const sites = Array.from(pairs).flatMap((pair) => [sitesOfAll[2 * pair], sitesOfAll[2 * pair + 1]]);
  const inverse = task.readout?.inverseFactor;
  const weights = Float64Array.from(pairs, (_, p) =>
    inverse === undefined ? 1 : inverse[sites[2 * p]] * inverse[sites[2 * p + 1]],
  );
  return sumAcceleration(task.spins, meanSpins(counts, null), sites, weights);
}
