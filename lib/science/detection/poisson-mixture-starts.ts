import type { CountTally } from "@/lib/science/detection/count-tally";
import type { MixtureParameters } from "@/lib/science/detection/poisson-mixture-likelihood";

/** Shares of the shots taken as dark in the starts that split by rank. */
const SPLIT_SHARES = [0.02, 0.1, 0.5, 0.9, 0.98];
/** Bright shares of the starts that split the excess variance. */
const MOMENT_WEIGHTS = [0.1, 0.5, 0.9];

/**
 * Returns starting points for the mixture's maximum likelihood: the shots split at their mean and at ranks, and rates
 * set apart by the variance that one Poisson law does not explain, var − mean = w(1 − w)(bright − dark)².
 */
export function mixtureStarts(tally: CountTally): MixtureParameters[] {
  const starts = [splitAt(tally, tally.mean)];
  for (const share of SPLIT_SHARES) starts.push(splitAt(tally, countAtShare(tally, share)));
  for (const weight of MOMENT_WEIGHTS) starts.push(setApart(tally, weight));
  return starts.filter((start) => start !== null);
}

/** Returns the means of the counts up to `cut` and above it; null when all lie on one side. */
function splitAt(tally: CountTally, cut: number): MixtureParameters | null {
  let darkShots = 0;
  let darkSum = 0;
  for (let e = 0; e < tally.counts.length && tally.counts[e] <= cut; e++) {
    darkShots += tally.frequencies[e];
    darkSum += tally.frequencies[e] * tally.counts[e];
  }
  const brightShots = tally.shots - darkShots;
  if (darkShots === 0 || brightShots === 0) return null;
  // A dark rate of exactly 0 is a trap for EM: it never leaves it.
  const dark = Math.max(darkSum / darkShots, 0.01 * tally.mean);
  const bright = (tally.mean * tally.shots - darkSum) / brightShots;
  return { dark, bright, brightWeight: brightShots / tally.shots };
}

function countAtShare(tally: CountTally, share: number): number {
  let below = 0;
  for (let e = 0; e < tally.counts.length; e++) {
    below += tally.frequencies[e];
    if (below >= share * tally.shots) return tally.counts[e];
  }
  return tally.mean;
}

function setApart(tally: CountTally, weight: number): MixtureParameters | null {
  const excess = tally.variance - tally.mean;
  if (excess <= 0) return null;
  const apart = Math.sqrt(excess / (weight * (1 - weight)));
  const dark = Math.max(tally.mean - weight * apart, 0.01 * tally.mean);
  return { dark, bright: tally.mean + (1 - weight) * apart, brightWeight: weight };
}
