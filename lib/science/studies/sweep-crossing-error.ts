import type { TraceCrossing } from "@/lib/science/front/crossing";
import { poolUntilIncreasing, type CrossingScratch } from "@/lib/science/front/crossing-kernel";
import type { FrontRule } from "@/lib/science/front/front-rule";
import type { TraceSet } from "@/lib/science/front/trace-set";

/** How one sample moves what lies between the two ends of the crossed piece. */
interface CrossedPiece {
  /** Signal per µs. */
  slope: number;
  /** `[sample]`, share of each sample in the interpolated signal at the crossing. */
  share: Float64Array;
}

/**
 * Returns the standard error in µs of a resolved crossing to first order in the trace's errors (times are independent): the noise
 * of the straight piece that is crossed, and of the level where it follows the maximum, over the piece's slope. Which
 * samples are pooled, and which is the maximum, is taken as fixed. `scratch` must be as `findCrossing` left it. NaN where
 * the piece does not rise.
 */
export function crossingError_us(traces: TraceSet, trace: number, crossing: TraceCrossing, rule: FrontRule, scratch: CrossingScratch): number {
  const peak = scratch.timeIndex.subarray(0, scratch.count).indexOf(crossing.peakTimeIndex);
  const piece = rule.method === "isotonic" ? pooledPiece(scratch, peak, crossing) : sampledPiece(scratch, crossing);
  if (piece === null || !(piece.slope > 0)) return Number.NaN;
  if (rule.rule === "fraction-of-max") piece.share[peak] -= rule.level;
  const row = trace * traces.times_us.length;
  let variance = 0;
  for (let sample = 0; sample < scratch.count; sample++) {
    // A sample without a share must not spoil the sum by an error that is not a number.
    if (piece.share[sample] !== 0) variance += (piece.share[sample] * traces.error[row + scratch.timeIndex[sample]]) ** 2;
  }
  return Math.sqrt(variance) / piece.slope;
}

function pooledPiece(scratch: CrossingScratch, peak: number, { level, time_us }: TraceCrossing): CrossedPiece | null {
  const pools = poolUntilIncreasing(scratch, peak);
  const { poolSignal, poolTime_us, poolWeight, weight, count } = scratch;
  let right = 1;
  while (right < pools && poolSignal[right] < level) right += 1;
  if (right >= pools) return null;
  const rightShare = (time_us - poolTime_us[right - 1]) / (poolTime_us[right] - poolTime_us[right - 1]);
  const share = new Float64Array(count);
  let sample = 0;
  for (let pool = 0; pool <= right; pool++) {
    const poolShare = pool === right ? rightShare : pool === right - 1 ? 1 - rightShare : 0;
    // Weights are whole numbers of shots, so the sums that end a pool are exact.
    for (let mass = 0; mass < poolWeight[pool]; sample++) {
      mass += weight[sample];
      share[sample] = (poolShare * weight[sample]) / poolWeight[pool];
    }
  }
  return { slope: (poolSignal[right] - poolSignal[right - 1]) / (poolTime_us[right] - poolTime_us[right - 1]), share };
}

function sampledPiece({ signal, time_us: times_us, count }: CrossingScratch, { time_us }: TraceCrossing): CrossedPiece | null {
  let right = 1;
  while (right < count && times_us[right] < time_us) right += 1;
  if (right >= count) return null;
  const step_us = times_us[right] - times_us[right - 1];
  const share = new Float64Array(count);
  share[right] = (time_us - times_us[right - 1]) / step_us;
  share[right - 1] = 1 - share[right];
  return { slope: (signal[right] - signal[right - 1]) / step_us, share };
}
