import { logGamma } from "@/lib/science/stats/gamma-functions";

/** The distinct counts of a histogram with their frequencies; empty bins are left out. */
export interface CountTally {
  /** `[entry]`, ascending. */
  counts: Float64Array;
  /** `[entry]`, each > 0. */
  frequencies: Float64Array;
  /** Σ frequency */
  shots: number;
  /** Σ frequency · count / shots */
  mean: number;
  /** Σ frequency · (count − mean)² / shots */
  variance: number;
  /** Σ frequency · ln count!, the part of a Poisson log likelihood that no parameter moves. */
  logFactorials: number;
}

/** Returns the tally of `frequencies[count]`, counts from 0; mean and variance are NaN without shots. */
export function tallyCounts(frequencies: ArrayLike<number>): CountTally {
  const kept: number[] = [];
  for (let n = 0; n < frequencies.length; n++) if (frequencies[n] > 0) kept.push(n);
  const counts = Float64Array.from(kept);
  const keptFrequencies = counts.map((n) => frequencies[n]);
  let shots = 0;
  let sum = 0;
  let logFactorials = 0;
  for (let e = 0; e < counts.length; e++) {
    shots += keptFrequencies[e];
    sum += keptFrequencies[e] * counts[e];
    logFactorials += keptFrequencies[e] * logGamma(counts[e] + 1);
  }
  const mean = sum / shots;
  let squares = 0;
  for (let e = 0; e < counts.length; e++) squares += keptFrequencies[e] * (counts[e] - mean) ** 2;
  return { counts, frequencies: keptFrequencies, shots, mean, variance: squares / shots, logFactorials };
}
