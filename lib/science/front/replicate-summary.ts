import { tailQuantiles } from "@/lib/science/stats/selection";

const LOWER_TAIL = 0.025;

/** What the replicates of one quantity say; NaN where undefined. */
export interface ReplicateSummary {
  /** Replicates with a finite value; the others are left out. */
  count: number;
  /** Standard deviation over replicates (n − 1), NaN below two. */
  error: number;
  /** 95 % percentile interval, type 7 quantiles. */
  low: number;
  high: number;
}

/** Returns count, standard deviation and 95 % percentile interval of the finite values. */
export function summariseReplicates(values: Float64Array): ReplicateSummary {
  const finite = new Float64Array(values.length);
  let count = 0;
  let mean = 0;
  for (let b = 0; b < values.length; b++) {
    const value = values[b];
    // The difference is zero for finite values only.
    if (value - value !== 0) continue;
    finite[count] = value;
    count += 1;
    mean += (value - mean) / count;
  }
  if (count < 2) return { count, error: NaN, low: NaN, high: NaN };
  let squares = 0;
  for (let b = 0; b < count; b++) squares += (finite[b] - mean) ** 2;
  const [low, high] = tailQuantiles(finite.subarray(0, count), LOWER_TAIL);
  return { count, error: Math.sqrt(squares / (count - 1)), low, high };
}
