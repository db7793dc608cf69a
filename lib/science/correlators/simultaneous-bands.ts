import type { TraceSet } from "@/lib/science/front/trace-set";
import { quantileSorted } from "@/lib/science/stats/quantiles";

/** Bands that hold whole traces, not single samples. */
export interface SimultaneousBands {
  /** `[trace]`, how many standard errors the band reaches to either side; NaN without replicates. */
  factor: Float64Array;
  /** `[trace][k]` */
  low: Float64Array;
  /** `[trace][k]` */
  high: Float64Array;
}

const LEVEL = 0.95;

/**
 * Returns for each trace the band value ± c · SE that holds the whole true trace in 95 % of the cases: c is the 95 % quantile over
 * replicates of the largest deviation |C* − C| / SE of the trace (the bootstrap's version of Scheffé bands; sup-t, Montiel Olea and
 * Plagborg-Møller 2019). Samples without spread are left out of the largest deviation.
 */
export function simultaneousBands(traces: TraceSet): SimultaneousBands {
  const times = traces.times_us.length;
  const bands: SimultaneousBands = {
    factor: new Float64Array(traces.labels.length),
    low: new Float64Array(traces.value.length),
    high: new Float64Array(traces.value.length),
  };
  traces.labels.forEach((_, trace) => {
    const factor = quantileSorted(largestDeviations(traces, trace).sort(), LEVEL);
    bands.factor[trace] = factor;
    for (let at = trace * times; at < (trace + 1) * times; at++) {
      bands.low[at] = traces.value[at] - factor * traces.error[at];
      bands.high[at] = traces.value[at] + factor * traces.error[at];
    }
  });
  return bands;
}

/** `[replicate]` */
function largestDeviations({ labels, times_us, value, error, replicateCount, replicates }: TraceSet, trace: number): Float64Array {
  const largest = new Float64Array(replicateCount);
  for (let k = 0; k < times_us.length; k++) {
    const centre = value[trace * times_us.length + k];
    const scale = 1 / error[trace * times_us.length + k];
    if (!Number.isFinite(scale)) continue;
    const row = (k * labels.length + trace) * replicateCount;
    for (let b = 0; b < replicateCount; b++) {
      const deviation = Math.abs(replicates[row + b] - centre) * scale;
      if (deviation > largest[b]) largest[b] = deviation;
    }
  }
  return largest;
}
