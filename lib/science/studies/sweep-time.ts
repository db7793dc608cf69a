import { countUps, type UpCounts } from "@/lib/science/correlators/connected-correlators";
import { packSpins, wordsPerSite, type BrightIs, type PackedSpins } from "@/lib/science/correlators/packed-spins";
import { listPairs } from "@/lib/science/correlators/pairs";
import { pairsOfTrace, type TracePlan } from "@/lib/science/correlators/trace-plan";

/** One evolution time of a sweep; can be sent to a thread as it is. */
export interface SweepTimeTask {
  timeIndex: number;
  /** `[shot][site]` */
  counts: Uint16Array | Float32Array;
  shots: number;
  sites: number;
  /** `[site]` */
  thresholds: Float64Array;
  brightIs: BrightIs;
  /** `[shift]`, added to all thresholds. */
  thresholdShifts: readonly number[];
  /** `[shift][site]`, 1/F_i; null where readout is not corrected at this shift. */
  inverseFactors: readonly (Float64Array | null)[];
  /** The distance averages. */
  distancePlan: TracePlan;
}

/** What a sweep keeps of one evolution time: all combinations follow from it. */
export interface SweepTime {
  timeIndex: number;
  shots: number;
  /** `[shift]` */
  readings: SweepReading[];
}

/** One evolution time read with one set of thresholds. */
export interface SweepReading {
  counts: UpCounts;
  /** `[trace]`, squared standard errors of the distance averages. */
  distanceVariance: Float64Array;
  /** The same corrected for readout; null where that is not possible. */
  correctedDistanceVariance: Float64Array | null;
}

/** Returns the up counts and the errors of the distance averages at one evolution time for every threshold shift. */
export function sweepTime(task: SweepTimeTask): SweepTime {
  const { timeIndex, counts, shots, sites, thresholds, brightIs, thresholdShifts, inverseFactors, distancePlan } = task;
  const readings = thresholdShifts.map((shift, at): SweepReading => {
    const spins = packSpins(counts, shots, sites, thresholds.map((threshold) => threshold + shift), brightIs);
    const ups = countUps(spins);
    const factors = inverseFactors[at];
    return {
      counts: ups,
      distanceVariance: averageVariances(spins, ups, distancePlan, null),
      correctedDistanceVariance: factors === null ? null : averageVariances(spins, ups, distancePlan, factors),
    };
  });
  return { timeIndex, shots, readings };
}

/**
 * Returns the squared standard error of every trace of the plan, `[trace]`, by the delta method: C_ij is to first order
 * the mean over shots of (σ_i − ⟨σ_i⟩)(σ_j − ⟨σ_j⟩), times `factors[i] · factors[j]` when given, so that a trace's variance is
 * that of its pairs' mean over shots, divided by M. NaN without shots.
 */
export function averageVariances(spins: PackedSpins, { up, shots }: UpCounts, plan: TracePlan, factors: Float64Array | null): Float64Array {
  const { sites, words } = spins;
  const stride = wordsPerSite(shots);
  const places = listPairs(sites);
  const pairRows = plan.labels.map((_, trace) => Uint16Array.from(Array.from(pairsOfTrace(plan, trace)).flatMap((pair) => [places[2 * pair], places[2 * pair + 1]])));
  const sum = new Float64Array(pairRows.length);
  const squares = new Float64Array(pairRows.length);
  const mean = Float64Array.from(up, (count) => (2 * count) / shots - 1);
  const departure = new Float64Array(sites);
  for (let s = 0; s < shots; s++) {
    for (let i = 0; i < sites; i++) {
      const spin = (words[i * stride + (s >>> 5)] >>> (s & 31)) & 1 ? 1 : -1;
      departure[i] = (spin - mean[i]) * (factors === null ? 1 : factors[i]);
    }
    for (let q = 0; q < pairRows.length; q++) {
      const value = meanProduct(departure, pairRows[q]);
      sum[q] += value;
      squares[q] += value * value;
    }
  }
  return squares.map((total, q) => Math.max(0, total / shots - (sum[q] / shots) ** 2) / shots);
}

function meanProduct(departure: Float64Array, row: Uint16Array): number {
  let total = 0;
  for (let p = 0; p < row.length; p += 2) total += departure[row[p]] * departure[row[p + 1]];
  return total / (row.length / 2);
}
