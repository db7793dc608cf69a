import type { TimeResult, TimeTask } from "@/lib/science/correlators/analyse-time";
import { correctedLaw, covarianceLaw, errorBarOfLaw, isRegular, scaledLaw } from "@/lib/science/correlators/bootstrap-law";
import { hasFewFlips } from "@/lib/science/correlators/connected-correlators";
import { twoSidedPValue } from "@/lib/science/correlators/independence-test";
import { listPairs, pairCount } from "@/lib/science/correlators/pairs";
import type { ReadoutReplicates } from "@/lib/science/correlators/readout-correction";
import { pairsOfTrace, type TracePlan } from "@/lib/science/correlators/trace-plan";
import { standardDeviation } from "@/lib/science/stats/intervals";
import { softReplicates } from "@/lib/science/threshold-free/soft-replicates";
import { soften, softCovariance, softOutcomes, softPairMoments, type SoftSums } from "@/lib/science/threshold-free/soft-moments";
import type { SoftSpins } from "@/lib/science/threshold-free/soft-spins";

/** An evolution time read without thresholds; everything else as in `TimeTask`. There is no readout left to correct. */
export interface SoftTimeTask extends Omit<TimeTask, "spins" | "readout"> {
  spins: SoftSpins;
  /** What each replicate makes of the soft spins under its own laws of counts; null when the laws are taken as exact. */
  lawReplicates: ReadoutReplicates | null;
}

/** What is known of one evolution time before its replicates. */
export interface SoftTime {
  task: SoftTimeTask;
  sums: SoftSums;
  /** `[pair][2]` */
  sitesOfPair: Uint16Array;
  /** `[pair]`, plug-in covariance. */
  plugIn: Float64Array;
  /** What a plug-in covariance is multiplied by: 1, or M/(M − 1). */
  scale: number;
}

/**
 * Returns means, all connected correlators and traces of one evolution time from soft spins: ⟨σ_i⟩ is their mean and C_ij their covariance,
 * which need no readout correction, with the joint bootstrap of `analyseTime` over the same resampled shots. Single pairs' errors and
 * intervals come from the bootstrap law of a covariance (`law`) where each soft outcome has 25 shots or more, else from
 * replicates; `fewFlips` marks a soft outcome below 5 shots; `pValue` is that of the correlation coefficient r under permutation of the
 * shots, 2 Φ(−|r| √(M − 1)) (Pitman 1937). Undefined values as in `TimeResult`.
 */
export function analyseTimeSoftly(task: SoftTimeTask): TimeResult {
  const time = prepareTime(task);
  const result = valuesWithoutErrors(time);
  addTraceValues(task.plan, result);
  if (task.replicates === 0) return result;
  const { shots } = task.spins;
  if (shots < 2) {
    result.traceReplicates.forEach((_, at) => {
      result.traceReplicates[at] = result.traceValue[Math.floor(at / task.replicates)];
    });
    return result;
  }
  const byLaw = task.pairErrors === "law" && task.blockLength === 1;
  if (byLaw) {
    result.meanError.forEach((_, i) => (result.meanError[i] = meanErrorByLaw(time, i)));
    lawOfSoftPairs(time, result);
  }
  softReplicates(time, result);
  if (task.blockLength > 1) result.pValue = result.value.map((value, pair) => twoSidedPValue(value / result.error[pair]));
  return result;
}

function prepareTime(task: SoftTimeTask): SoftTime {
  const { shots, sites } = task.spins;
  const sums = soften(task.spins);
  const sitesOfPair = listPairs(sites);
  const plugIn = new Float64Array(pairCount(sites));
  for (let pair = 0; pair < plugIn.length; pair++) {
    plugIn[pair] = softCovariance(sums, shots, sitesOfPair[2 * pair], sitesOfPair[2 * pair + 1]);
  }
  return { task, sums, sitesOfPair, plugIn, scale: task.estimator === "unbiased" ? shots / (shots - 1) : 1 };
}

function valuesWithoutErrors(time: SoftTime): TimeResult {
  const { task, sums, plugIn, scale } = time;
  const undefinedRow = (length: number) => new Float64Array(length).fill(Number.NaN);
  const traces = task.plan.distances.length;
  const fewFlips = Uint8Array.from(plugIn, (_, pair) => (hasFewFlips(outcomesOf(time, pair)) ? 1 : 0));
  return {
    timeIndex: task.timeIndex,
    shots: task.spins.shots,
    mean: sums.mean.slice(),
    meanError: undefinedRow(task.spins.sites),
    value: plugIn.map((c) => c * scale),
    error: undefinedRow(plugIn.length),
    low: undefinedRow(plugIn.length),
    high: undefinedRow(plugIn.length),
    fewFlips,
    pValue: task.replicates === 0 ? undefinedRow(plugIn.length) : plugIn.map((_, pair) => permutationPValue(time, pair)),
    traceValue: new Float64Array(traces),
    traceError: undefinedRow(traces),
    traceLow: undefinedRow(traces),
    traceHigh: undefinedRow(traces),
    traceFewFlips: anyOfTrace(task.plan, fewFlips),
    traceReplicates: new Float64Array(traces * task.replicates),
  };
}

function outcomesOf({ task, sums, sitesOfPair, plugIn }: SoftTime, pair: number): [number, number, number, number] {
  return softOutcomes(task.spins.shots, sums.mean[sitesOfPair[2 * pair]], sums.mean[sitesOfPair[2 * pair + 1]], plugIn[pair]);
}

function permutationPValue({ task, sums, sitesOfPair, plugIn }: SoftTime, pair: number): number {
  const spread = sums.variance[sitesOfPair[2 * pair]] * sums.variance[sitesOfPair[2 * pair + 1]];
  return spread === 0 ? 1 : twoSidedPValue((plugIn[pair] * Math.sqrt(task.spins.shots - 1)) / Math.sqrt(spread));
}

function anyOfTrace(plan: TracePlan, flags: Uint8Array): Uint8Array {
  return Uint8Array.from(plan.distances, (_, q) => (pairsOfTrace(plan, q).some((pair) => flags[pair] === 1) ? 1 : 0));
}

function addTraceValues(plan: TracePlan, result: TimeResult): void {
  plan.distances.forEach((_, q) => {
    const pairs = pairsOfTrace(plan, q);
    for (const pair of pairs) result.traceValue[q] += (1 / pairs.length) * result.value[pair];
  });
}

/** Of the shots exactly, and of the drawn laws of counts with it. */
function meanErrorByLaw({ task, sums }: SoftTime, i: number): number {
  const { replicates, lawReplicates, spins } = task;
  const variance = sums.variance[i] / spins.shots;
  if (lawReplicates === null) return Math.sqrt(variance);
  const factors = lawReplicates.inverseFactor.subarray(i * replicates, (i + 1) * replicates);
  const means = factors.map((factor, b) => (sums.mean[i] - lawReplicates.offset[i * replicates + b]) * factor);
  const spread = replicates < 2 ? 0 : standardDeviation(means);
  return Math.sqrt(variance * lawReplicates.factorMoments[i][1] + spread * spread);
}

function lawOfSoftPairs(time: SoftTime, result: TimeResult): void {
  const { task, sums, sitesOfPair, plugIn, scale } = time;
  const { shots } = task.spins;
  const factors = task.lawReplicates?.factorMoments;
  for (let pair = 0; pair < plugIn.length; pair++) {
    if (!isRegular(outcomesOf(time, pair))) continue;
    const i = sitesOfPair[2 * pair];
    const j = sitesOfPair[2 * pair + 1];
    const moments = softPairMoments(sums, shots, i, j, plugIn[pair]);
    // Leaving out a shot moves a covariance in proportion to w, so Σd³/(6 (Σd²)^{3/2}) is one of its moments.
    const acceleration = moments.w2 === 0 ? 0 : moments.w3 / (6 * Math.sqrt(shots) * moments.w2 ** 1.5);
    const exact = scaledLaw(covarianceLaw(moments, shots), scale);
    const law = factors === undefined ? exact : correctedLaw(exact, factors[i], factors[j]);
    const bar = errorBarOfLaw(law, result.value[pair], task.interval, acceleration);
    result.error[pair] = bar.error;
    result.low[pair] = bar.low;
    result.high[pair] = bar.high;
  }
}
