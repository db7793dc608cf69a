import type { TimeResult } from "@/lib/science/correlators/analyse-time";
import type { ErrorBar } from "@/lib/science/correlators/error-bars";
import { pairsOfTrace } from "@/lib/science/correlators/trace-plan";
import { standardDeviation } from "@/lib/science/stats/intervals";
import type { SoftTime } from "@/lib/science/threshold-free/analyse-time-softly";
import { resampledMeans } from "@/lib/science/threshold-free/resampled-means";
import { errorBarOfReplicates } from "@/lib/science/threshold-free/soft-error-bar";

/** Rows of products that are held at a time. */
const STEP = 256;

/** Pairs whose average is one row of products: a part of trace `trace`, or a single pair without one. */
interface Term {
  pairs: Uint32Array;
  trace: number | null;
}

/**
 * Draws joint replicates of the traces, and writes them with every error and interval that `result` still lacks (NaN). An average over
 * pairs is linear in the shots' products, so a trace needs one row of products, whatever its pairs; where each replicate has its own
 * laws of counts, one row a pair.
 */
export function softReplicates(time: SoftTime, result: TimeResult): void {
  const siteMeans = deviationReplicates(time);
  if (Number.isNaN(result.meanError[0])) setMeanErrors(time, siteMeans, result);
  const terms = listTerms(time, result);
  for (let first = 0; first < terms.length; first += STEP) addTerms(time, siteMeans, terms.slice(first, first + STEP), result);
  const { plan, replicates, interval } = time.task;
  plan.distances.forEach((_, q) => {
    const values = result.traceReplicates.subarray(q * replicates, (q + 1) * replicates);
    const bar = errorBarOfReplicates(values, result.traceValue[q], interval, accelerationOf(time, pairsOfTrace(plan, q)));
    result.traceError[q] = bar.error;
    result.traceLow[q] = bar.low;
    result.traceHigh[q] = bar.high;
  });
}

/** `[site][replicate]`, how far each replicate's mean lies from the mean of all shots. */
function deviationReplicates({ task, sums }: SoftTime): Float64Array {
  const { shots, sites } = task.spins;
  return resampledMeans({ ...task, shots }, sites, (i, readings) => readings.set(sums.deviations.subarray(i * shots, (i + 1) * shots)));
}

function setMeanErrors({ task, sums }: SoftTime, siteMeans: Float64Array, result: TimeResult): void {
  const { replicates, lawReplicates } = task;
  for (let i = 0; i < sums.mean.length; i++) {
    const values = siteMeans.slice(i * replicates, (i + 1) * replicates);
    for (let b = 0, at = i * replicates; lawReplicates !== null && b < replicates; b++, at++) {
      values[b] = (sums.mean[i] + values[b] - lawReplicates.offset[at]) * lawReplicates.inverseFactor[at];
    }
    result.meanError[i] = standardDeviation(values);
  }
}

function listTerms({ task: { plan, lawReplicates } }: SoftTime, result: TimeResult): Term[] {
  const singly = (pairs: Uint32Array, trace: number | null) => Array.from(pairs, (_, p) => ({ pairs: pairs.subarray(p, p + 1), trace }));
  const ofTraces = Array.from(plan.distances, (_, q) => {
    const pairs = pairsOfTrace(plan, q);
    return lawReplicates === null ? [{ pairs, trace: q }] : singly(pairs, q);
  });
  const lacking = Uint32Array.from(result.error.keys()).filter((pair) => Number.isNaN(result.error[pair]));
  return [...ofTraces.flat(), ...singly(lacking, null)];
}

function addTerms(time: SoftTime, siteMeans: Float64Array, terms: readonly Term[], result: TimeResult): void {
  const { task, scale } = time;
  const { replicates, plan, interval } = task;
  const means = resampledMeans({ ...task, shots: task.spins.shots }, terms.length, (n, readings) => addProducts(time, terms[n].pairs, readings));
  terms.forEach(({ pairs, trace }, n) => {
    const values = means.subarray(n * replicates, (n + 1) * replicates);
    subtractMeans(time, siteMeans, pairs, values);
    const share = trace === null ? 1 : pairs.length / pairsOfTrace(plan, trace).length;
    for (let b = 0; b < replicates; b++) values[b] *= scale * share;
    if (trace !== null) addTo(result.traceReplicates, trace * replicates, values);
    else setPair(result, pairs[0], errorBarOfReplicates(values, result.value[pairs[0]], interval, accelerationOf(time, pairs)));
  });
}

/** From means of products to covariances, each with its replicate's own laws of counts. */
function subtractMeans({ task, sitesOfPair }: SoftTime, siteMeans: Float64Array, pairs: Uint32Array, values: Float64Array): void {
  const { replicates, lawReplicates } = task;
  for (const pair of pairs) {
    const i = sitesOfPair[2 * pair] * replicates;
    const j = sitesOfPair[2 * pair + 1] * replicates;
    for (let b = 0; b < replicates; b++) values[b] -= (siteMeans[i + b] * siteMeans[j + b]) / pairs.length;
    if (lawReplicates === null) continue;
    // Terms are single pairs then.
    for (let b = 0; b < replicates; b++) values[b] *= lawReplicates.inverseFactor[i + b] * lawReplicates.inverseFactor[j + b];
  }
}

function addTo(rows: Float64Array, offset: number, values: Float64Array): void {
  for (let b = 0; b < values.length; b++) rows[offset + b] += values[b];
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

/** Σd³ / (6 (Σd²)^{3/2}), d the deviations of the products from their mean (jackknife-acceleration.ts); 0 where no BCa is asked for. */
function accelerationOf(time: SoftTime, pairs: Uint32Array): number {
  if (time.task.interval !== "bca") return 0;
  const products = new Float64Array(time.task.spins.shots);
  addProducts(time, pairs, products);
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

function setPair(result: TimeResult, pair: number, bar: ErrorBar): void {
  result.error[pair] = bar.error;
  result.low[pair] = bar.low;
  result.high[pair] = bar.high;
}
