import { quantileSorted } from "@/lib/science/stats/quantiles";

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
  const sorted = values.filter((value) => Number.isFinite(value)).sort();
  const count = sorted.length;
  if (count < 2) return { count, error: NaN, low: NaN, high: NaN };
  let mean = 0;
  for (const value of sorted) mean += value / count;
  let squares = 0;
  for (const value of sorted) squares += (value - mean) ** 2;
  return {
    count,
    error: Math.sqrt(squares / (count - 1)),
    low: quantileSorted(sorted, LOWER_TAIL),
    high: quantileSorted(sorted, 1 - LOWER_TAIL),
  };
}
