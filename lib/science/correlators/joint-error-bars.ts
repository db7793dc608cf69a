import type { TimeResult, TimeTask } from "@/lib/science/correlators/analyse-time";
import { correlatorScale, jointOutcomes, meanSpins, type UpCounts } from "@/lib/science/correlators/connected-correlators";
import { errorBarOf, type ErrorBar } from "@/lib/science/correlators/error-bars";
import { pairAcceleration, sumAcceleration } from "@/lib/science/correlators/jackknife-acceleration";
import {
  countReplicates,
  prepareJointBootstrap,
  siteRow,
  type CountedPair,
  type JointBootstrap,
} from "@/lib/science/correlators/joint-bootstrap";
import { listPairs } from "@/lib/science/correlators/pairs";
import { pairsOfTrace, type TracePlan } from "@/lib/science/correlators/trace-plan";

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
 * Draws the joint replicates of the `needed` pairs, and writes the traces' replicates and every error and interval that `result` still
 * lacks (NaN) for them.
 */
export function jointReplicates(task: TimeTask, counts: UpCounts, result: TimeResult, needed: Uint8Array): void {
  const { spins, readout, replicates, seed, blockLength, timeIndex, plan } = task;
  const run = prepareJointBootstrap({ spins, readout, replicates, seed, blockLength, timeIndex, needed, traceCount: plan.distances.length });
  const work = { task, run, counts, result, sharesOfPair: tracesOfPairs(plan) };
  countReplicates(run, (pairs) => pairs.forEach((pair) => analysePair(work, pair)));
  if (Number.isNaN(result.meanError[0])) analyseMeans(work);
  analyseTraces(work);
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

function analysePair({ task, run, counts, result, sharesOfPair }: Work, { i, j, pair, bothUp }: CountedPair): void {
  const { kernel, layout } = run;
  const { shots, replicates, values, valueBytes, factors } = layout;
  const scale = correlatorScale(shots, task.estimator);
  const factorI = factors + i * valueBytes;
  const factorJ = factors + j * valueBytes;
  kernel.correlate(bothUp, siteRow(layout, i), siteRow(layout, j), factorI, factorJ, shots, scale, replicates, values);
  if (Number.isNaN(result.error[pair])) {
    const acceleration = task.interval === "bca" ? pairAcceleration(jointOutcomes(counts, i, j, pair)) : 0;
    const bar = errorBarOf(kernel, layout, values, result.value[pair], task.interval, acceleration);
    result.error[pair] = bar.error;
    result.low[pair] = bar.low;
    result.high[pair] = bar.high;
  }
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
    if (Number.isNaN(result.traceError[q])) setTrace(result, q, traceBar(work, q, row));
    const replicates = new Float64Array(kernel.memory.buffer, row, task.replicates);
    result.traceReplicates.set(replicates, q * task.replicates);
  });
}

function traceBar(work: Work, q: number, row: number): ErrorBar {
  const { interval } = work.task;
  const acceleration = interval === "bca" ? traceAcceleration(work, q) : 0;
  return errorBarOf(work.run.kernel, work.run.layout, row, work.result.traceValue[q], interval, acceleration);
}

function setTrace(result: TimeResult, q: number, bar: ErrorBar): void {
  result.traceError[q] = bar.error;
  result.traceLow[q] = bar.low;
  result.traceHigh[q] = bar.high;
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
