import { clopperPearson, type Interval } from "@/lib/science/stats/intervals";

/** How often an interval held the truth, in sums that tasks can be merged by. */
export interface CoverageTally {
  /** Simulated repeats with at least one interval. */
  repeats: number;
  /** Intervals, and those among them that hold the truth. */
  intervals: number;
  held: number;
  /** Sums over repeats of the products of both, for the spread between repeats. */
  squaredHeld: number;
  heldTimesIntervals: number;
  squaredIntervals: number;
  /** Intervals wholly below the truth, and wholly above. */
  below: number;
  above: number;
  /** Of estimate − truth. */
  sum: number;
  squares: number;
  /** Of the standard errors given. */
  errors: number;
}

/** One interval of a repeat. */
export interface Estimate {
  value: number;
  error: number;
  low: number;
  high: number;
}

export function emptyTally(): CoverageTally {
  return { repeats: 0, intervals: 0, held: 0, squaredHeld: 0, heldTimesIntervals: 0, squaredIntervals: 0, below: 0, above: 0, sum: 0, squares: 0, errors: 0 };
}

/** Adds the intervals of one repeat, each with its truth, to the tally (mutated). */
export function addRepeat(tally: CoverageTally, estimates: readonly { estimate: Estimate; truth: number }[]): void {
  if (estimates.length === 0) return;
  let held = 0;
  for (const { estimate, truth } of estimates) {
    const { value, error, low, high } = estimate;
    if (low <= truth && truth <= high) held += 1;
    else if (high < truth) tally.below += 1;
    else tally.above += 1;
    tally.sum += value - truth;
    tally.squares += (value - truth) ** 2;
    tally.errors += error;
  }
  tally.repeats += 1;
  tally.intervals += estimates.length;
  tally.held += held;
  tally.squaredHeld += held * held;
  tally.heldTimesIntervals += held * estimates.length;
  tally.squaredIntervals += estimates.length ** 2;
}

/** Returns the sum of two tallies. */
export function mergeTallies(first: CoverageTally, second: CoverageTally): CoverageTally {
  const sum = { ...first };
  for (const name of Object.keys(first) as (keyof CoverageTally)[]) sum[name] += second[name];
  return sum;
}

/** Returns the share of intervals that hold the truth; NaN without any. */
export function coverageOf({ held, intervals }: CoverageTally): number {
  return held / intervals;
}

/**
 * Returns the 95 % limits of a coverage by Clopper and Pearson (1934). Intervals of one repeat share their shots: with several of them
 * the number of trials is the one whose binomial spread is that of the ratio between repeats (Kish 1965, design effect).
 */
export function coverageLimits(tally: CoverageTally): Interval {
  const { repeats, intervals, held, squaredHeld, heldTimesIntervals, squaredIntervals } = tally;
  if (intervals === repeats) return clopperPearson(held, intervals);
  const share = held / intervals;
  const between = squaredHeld - 2 * share * heldTimesIntervals + share * share * squaredIntervals;
  const variance = between / intervals ** 2;
  const trials = variance > 0 ? Math.min(intervals, (share * (1 - share)) / variance) : repeats;
  return clopperPearson(share * trials, trials);
}

/** Returns a coverage in per cent with its limits, such as "94.8 (92.1–96.7)". */
export function coverageText(tally: CoverageTally): string {
  if (tally.intervals === 0) return "–";
  const [low, high] = coverageLimits(tally);
  return `${percent(coverageOf(tally))} (${percent(low)}–${percent(high)})`;
}

/** Returns a share in per cent with one decimal, without the sign. */
export function percent(share: number): string {
  return (100 * share).toFixed(1);
}
