import { createCrossingScratch, crossingTime_us, loadSignal, orientSignal, reloadSignal } from "@/lib/science/front/crossing-kernel";
import type { FrontRule } from "@/lib/science/front/front-rule";
import type { TraceSet } from "@/lib/science/front/trace-set";
import { summariseReplicates } from "@/lib/science/front/replicate-summary";

/** Error bar of one crossing time from its replicates; NaN where too few replicates cross. */
export interface CrossingSpread {
  error_us: number;
  low_us: number;
  high_us: number;
  /** Share of replicates without a crossing, NaN without replicates. */
  failedShare: number;
}

/** Replicates transposed at a time, so that a block stays in cache while its samples are gathered. */
const BLOCK = 64;

/**
 * Returns the crossing time in µs of every trace in every replicate, `[trace][replicate]`, NaN where there is none.
 * Each replicate has its own maximum and, under `fraction-of-max`, its own level; else `levels`, `[trace]`, applies.
 * There is no test for a resolved signal, and a signal already at the level counts as crossing at its first time.
 */
export function replicateCrossings(traces: TraceSet, rule: FrontRule, levels: Float64Array): Float64Array {
  const { times_us, shotsPerTime, replicates, replicateCount } = traces;
  const timeCount = times_us.length;
  const traceCount = traces.labels.length;
  const tau = new Float64Array(traceCount * replicateCount);
  const whole = createCrossingScratch(timeCount);
  const partial = createCrossingScratch(timeCount);
  // A stand-in signal without gaps: it only brings in the times and weights.
  loadSignal(whole, times_us, shotsPerTime, times_us, 0);
  const isWhole = whole.count === timeCount;
  const block = new Float64Array(BLOCK * timeCount);
  const isFraction = rule.rule === "fraction-of-max";
  for (let j = 0; j < traceCount; j++) {
    for (let start = 0; start < replicateCount; start += BLOCK) {
      const size = Math.min(BLOCK, replicateCount - start);
      gatherBlock(block, replicates, { timeCount, traceCount, replicateCount, trace: j, start, size });
      for (let b = 0; b < size; b++) {
        const scratch = isWhole && reloadSignal(whole, block, b * timeCount) ? whole : partial;
        if (scratch === partial) loadSignal(partial, times_us, shotsPerTime, block, b * timeCount);
        const peak = orientSignal(scratch, rule.absolute);
        const level = isFraction && peak >= 0 ? rule.level * scratch.signal[peak] : levels[j];
        tau[j * replicateCount + start + b] = crossingTime_us(scratch, peak, level, rule);
      }
    }
  }
  return tau;
}

/** Returns the standard error (n − 1), the 95 % percentile interval and the failed share of one trace's replicates. */
export function spreadOfCrossings(tau: Float64Array): CrossingSpread {
  const { count, error, low, high } = summariseReplicates(tau);
  return { error_us: error, low_us: low, high_us: high, failedShare: 1 - count / tau.length };
}

/** Writes the chosen replicates of one trace to `block` as `[replicate][k]`, from `[k][trace][replicate]`. */
function gatherBlock(
  block: Float64Array,
  replicates: Float64Array,
  at: { timeCount: number; traceCount: number; replicateCount: number; trace: number; start: number; size: number },
): void {
  const { timeCount, size } = at;
  for (let k = 0; k < timeCount; k++) {
    const source = (k * at.traceCount + at.trace) * at.replicateCount + at.start;
    for (let b = 0; b < size; b++) block[b * timeCount + k] = replicates[source + b];
  }
}
