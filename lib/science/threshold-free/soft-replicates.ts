import type { TimeResult } from "@/lib/science/correlators/analyse-time";
import type { ErrorBar } from "@/lib/science/correlators/error-bars";
import { pairsOfTrace } from "@/lib/science/correlators/trace-plan";
import { standardDeviation } from "@/lib/science/stats/intervals";
import type { SoftTime } from "@/lib/science/threshold-free/analyse-time-softly";
import { resampledMeans } from "@/lib/science/threshold-free/resampled-means";
import { errorBarOfReplicates } from "@/lib/science/threshold-free/soft-error-bar";

/** Averages whose products are held at a time. */
const STEP = 256;

/**
 * Draws joint replicates of the traces, and writes them with every error and interval that `result` still lacks (NaN). An average over
 * pairs is linear in the shots' products, so each needs one row of products, whatever its pairs.
 */
export function softReplicates(time: SoftTime, result: TimeResult): void {
  const { task } = time;
  const { replicates } = task;
  const siteMeans = deviationReplicates(time);
  if (Number.isNaN(result.meanError[0]) && replicates > 1) {
    result.meanError.forEach((_, i) => {
      result.meanError[i] = standardDeviation(siteMeans.subarray(i * replicates, (i + 1) * replicates));
    });
  }
  const traces = task.plan.distances.length;
  const lacking = Uint32Array.from(result.error.keys()).filter((pair) => Number.isNaN(result.error[pair]));
  const pairsOf = (a: number) => (a < traces ? pairsOfTrace(task.plan, a) : lacking.subarray(a - traces, a - traces + 1));
  for (let first = 0; first < traces + lacking.length; first += STEP) {
    const averages = Array.from({ length: Math.min(STEP, traces + lacking.length - first) }, (_, n) => pairsOf(first + n));
    averageReplicates(time, siteMeans, averages, (n, values, acceleration) => {
      const a = first + n;
      if (a < traces) {
        result.traceReplicates.set(values, a * replicates);
        setTrace(result, a, errorBarOfReplicates(values, result.traceValue[a], task.interval, acceleration));
      } else setPair(result, lacking[a - traces], errorBarOfReplicates(values, result.value[lacking[a - traces]], task.interval, acceleration));
    });
  }
}

/** `[site][replicate]`, how far each replicate's mean lies from the mean of all shots. */
function deviationReplicates({ task, sums }: SoftTime): Float64Array {
  const { shots, sites } = task.spins;
  return resampledMeans({ ...task, shots }, sites, (i, readings) => readings.set(sums.deviations.subarray(i * shots, (i + 1) * shots)));
}

type Receiver = (average: number, values: Float64Array, acceleration: number) => void;

/** Hands over the replicates `[replicate]` of each average over pairs, with the acceleration of its BCa interval. */
function averageReplicates(time: SoftTime, siteMeans: Float64Array, averages: readonly Uint32Array[], receive: Receiver): void {
  const { task, sitesOfPair, scale } = time;
  const { replicates } = task;
  const accelerations = new Float64Array(averages.length);
  const means = resampledMeans({ ...task, shots: task.spins.shots }, averages.length, (n, readings) => {
    addProducts(time, averages[n], readings);
    if (task.interval === "bca") accelerations[n] = accelerationOf(readings);
  });
  averages.forEach((pairs, n) => {
    const values = means.subarray(n * replicates, (n + 1) * replicates);
    for (const pair of pairs) {
      const i = sitesOfPair[2 * pair] * replicates;
      const j = sitesOfPair[2 * pair + 1] * replicates;
      for (let b = 0; b < replicates; b++) values[b] -= (siteMeans[i + b] * siteMeans[j + b]) / pairs.length;
    }
    for (let b = 0; b < replicates; b++) values[b] *= scale;
    receive(n, values, accelerations[n]);
  });
}

/** Adds the products of the deviations, averaged over the pairs, to `readings`, `[shot]`. */
function addProducts({ task, sums, sitesOfPair }: SoftTime, pairs: Uint32Array, readings: Float64Array): void {
  const { shots } = task.spins;
  const share = 1 / pairs.length;
  for (const pair of pairs) {
    const i = sitesOfPair[2 * pair] * shots;
    const j = sitesOfPair[2 * pair + 1] * shots;
    for (let s = 0; s < shots; s++) readings[s] += share * sums.deviations[i + s] * sums.deviations[j + s];
  }
}

/** Σd³ / (6 (Σd²)^{3/2}), d the deviations of the products from their mean; see jackknife-acceleration.ts. */
function accelerationOf(products: Float64Array): number {
  const centre = products.reduce((sum, product) => sum + product, 0) / products.length;
  let squares = 0;
  let cubes = 0;
  for (const product of products) {
    const d = product - centre;
    squares += d * d;
    cubes += d * d * d;
  }
  return squares === 0 ? 0 : cubes / (6 * squares ** 1.5);
}

function setTrace(result: TimeResult, q: number, bar: ErrorBar): void {
  result.traceError[q] = bar.error;
  result.traceLow[q] = bar.low;
  result.traceHigh[q] = bar.high;
}

function setPair(result: TimeResult, pair: number, bar: ErrorBar): void {
  result.error[pair] = bar.error;
  result.low[pair] = bar.low;
  result.high[pair] = bar.high;
}
