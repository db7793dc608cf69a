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
 * that of its pairs' mean over shots, divided by M. NaN without shots. Of very many pairs it is taken over evenly spread
 * shots, 256 or more, which gives it to a few per cent.
 */
export function averageVariances(spins: PackedSpins, { up, shots }: UpCounts, plan: TracePlan, factors: Float64Array | null): Float64Array {
  const { sites } = spins;
  const places = listPairs(sites);
  const rows = plan.labels.map((_, trace) => Uint16Array.from(Array.from(pairsOfTrace(plan, trace)).flatMap((pair) => [places[2 * pair], places[2 * pair + 1]])));
  const high = Float64Array.from(up, (count, i) => (2 - (2 * count) / shots) * (factors === null ? 1 : factors[i]));
  const low = Float64Array.from(up, (count, i) => ((-2 * count) / shots) * (factors === null ? 1 : factors[i]));
  const sum = new Float64Array(rows.length);
  const squares = new Float64Array(rows.length);
  const departure = new Float64Array(sites * BLOCK);
  const value = new Float64Array(BLOCK);
  const used = Math.min(shots, Math.max(LEAST_SHOTS, Math.floor(MOST_PRODUCTS / plan.pairs.length)));
  for (let start = 0; start < used; start += BLOCK) {
    const size = Math.min(BLOCK, used - start);
    loadDepartures(departure, spins, { start, size, spacing: shots / used }, high, low);
    for (let q = 0; q < rows.length; q++) {
      sumProducts(value, departure, rows[q], size);
      const pairs = rows[q].length / 2;
      for (let s = 0; s < size; s++) {
        sum[q] += value[s] / pairs;
        squares[q] += (value[s] / pairs) ** 2;
      }
    }
  }
  return squares.map((total, q) => Math.max(0, total / used - (sum[q] / used) ** 2) / shots);
}

/** Shots taken together, so that a pair is looked up once for all of them. */
const BLOCK = 64;
/** Shots times pairs of one variance; at 64 sites a sweep then takes a second or two. */
const MOST_PRODUCTS = 1e6;
const LEAST_SHOTS = 256;

/** Fills `[site][shot of the block]` with (σ_i − ⟨σ_i⟩) · factor: `high` for up, `low` for down. Shots lie `spacing` apart. */
function loadDepartures(departure: Float64Array, { sites, shots, words }: PackedSpins, at: { start: number; size: number; spacing: number }, high: Float64Array, low: Float64Array): void {
  const stride = wordsPerSite(shots);
  for (let s = 0; s < at.size; s++) {
    const shot = Math.floor((at.start + s) * at.spacing);
    for (let i = 0; i < sites; i++) {
      const isUp = (words[i * stride + (shot >>> 5)] >>> (shot & 31)) & 1;
      departure[i * BLOCK + s] = isUp === 1 ? high[i] : low[i];
    }
  }
}

/** Fills `value`, `[shot of the block]`, with the sum of a trace's products. */
function sumProducts(value: Float64Array, departure: Float64Array, row: Uint16Array, size: number): void {
  value.fill(0);
  for (let p = 0; p < row.length; p += 2) {
    const first = row[p] * BLOCK;
    const second = row[p + 1] * BLOCK;
    for (let s = 0; s < size; s++) value[s] += departure[first + s] * departure[second + s];
  }
}
