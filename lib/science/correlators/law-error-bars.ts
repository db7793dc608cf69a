import type { TimeResult, TimeTask } from "@/lib/science/correlators/analyse-time";
import { correctedLaw, errorBarOfLaw, isRegular, pairLaw, scaledLaw } from "@/lib/science/correlators/bootstrap-law";
import { correlatorScale, jointOutcomes, type UpCounts } from "@/lib/science/correlators/connected-correlators";
import { pairAcceleration } from "@/lib/science/correlators/jackknife-acceleration";
import { pairsOfTrace } from "@/lib/science/correlators/trace-plan";

/** Writes the error of every mean: of the shots, exactly √((1 − m²)/M), and of the drawn readout errors with it. */
export function lawOfMeans({ spins, readout, replicates }: TimeTask, counts: UpCounts, result: TimeResult): void {
  for (let i = 0; i < spins.sites; i++) {
    const read = (2 * counts.up[i]) / spins.shots - 1;
    const variance = (1 - read * read) / spins.shots;
    const drawn = readout?.replicates;
    if (readout === null || !drawn) {
      result.meanError[i] = Math.sqrt(variance) * (readout?.inverseFactor[i] ?? 1);
      continue;
    }
    let squares = 0;
    let spread = 0;
    let mean = 0;
    for (let b = 0; b < replicates; b++) {
      const factor = drawn.inverseFactor[i * replicates + b];
      const corrected = (read - drawn.offset[i * replicates + b]) * factor;
      squares += (factor * factor) / replicates;
      const step = corrected - mean;
      mean += step / (b + 1);
      spread += step * (corrected - mean);
    }
    result.meanError[i] = Math.sqrt(variance * squares + spread / Math.max(1, replicates - 1));
  }
}

/**
 * Writes errors and intervals of all pairs whose bootstrap law holds in closed form, and of the traces that are one such pair.
 * `needed`, `[pair]`, is set to 1 where joint replicates are still needed: for traces, and where the law does not hold.
 */
export function lawOfPairs(task: TimeTask, counts: UpCounts, result: TimeResult, needed: Uint8Array): void {
  const { spins, readout, interval } = task;
  const unit = (spins.shots * spins.shots * correlatorScale(spins.shots, task.estimator)) / 4;
  let pair = 0;
  for (let i = 0; i < spins.sites; i++) {
    for (let j = i + 1; j < spins.sites; j++, pair++) {
      const outcomes = jointOutcomes(counts, i, j, pair);
      needed[pair] = isRegular(outcomes) ? 0 : 1;
      if (needed[pair] === 1) continue;
      const moments = readout?.replicates?.factorMoments;
      const exact = readout === null || moments ? 1 : readout.inverseFactor[i] * readout.inverseFactor[j];
      const read = scaledLaw(pairLaw(outcomes), unit * exact);
      const law = moments ? correctedLaw(read, moments[i], moments[j]) : read;
      const bar = errorBarOfLaw(law, result.value[pair], interval, interval === "bca" ? pairAcceleration(outcomes) : 0);
      result.error[pair] = bar.error;
      result.low[pair] = bar.low;
      result.high[pair] = bar.high;
    }
  }
  takeOverSinglePairs(task, result, needed);
}

function takeOverSinglePairs({ plan }: TimeTask, result: TimeResult, needed: Uint8Array): void {
  plan.distances.forEach((_, trace) => {
    const pairs = pairsOfTrace(plan, trace);
    if (pairs.length === 1 && needed[pairs[0]] === 0) {
      result.traceError[trace] = result.error[pairs[0]];
      result.traceLow[trace] = result.low[pairs[0]];
      result.traceHigh[trace] = result.high[pairs[0]];
    }
  });
  plan.pairs.forEach((pair) => (needed[pair] = 1));
}
