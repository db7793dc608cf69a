import { logGamma } from "@/lib/science/stats/gamma-functions";
import { normalCdf } from "@/lib/science/stats/special-functions";

/** Below this expected number of shots in any outcome the exact test is used (Cochran 1954). */
const LEAST_EXPECTED = 5;
/** Equally probable tables may differ by rounding. */
const TIES = 1 + 1e-7;

/**
 * Returns the two-sided p-value of a pair's joint outcomes `[++, +−, −+, −−]` under C = 0: that of Pearson's χ² with one degree of
 * freedom, M C²/((1 − ⟨σ_i⟩²)(1 − ⟨σ_j⟩²)), or of Fisher's exact test (1934) where an outcome would be expected in fewer than 5
 * shots. 1 when a site never flips. A readout correction scales C and its error alike and does not change it.
 */
export function independencePValue(outcomes: readonly [number, number, number, number]): number {
  const [both, onlyI, onlyJ, neither] = outcomes;
  const shots = both + onlyI + onlyJ + neither;
  const upI = both + onlyI;
  const upJ = both + onlyJ;
  const spread = upI * (shots - upI) * (upJ * (shots - upJ));
  if (spread === 0) return 1;
  const expected = (Math.min(upI, shots - upI) * Math.min(upJ, shots - upJ)) / shots;
  if (expected < LEAST_EXPECTED) return fisherPValue(both, upI, upJ, shots);
  const z = ((shots * both - upI * upJ) * Math.sqrt(shots)) / Math.sqrt(spread);
  return twoSidedPValue(z);
}

/** Returns the two-sided p-value of a standard normal deviation. */
export function twoSidedPValue(z: number): number {
  return 2 * normalCdf(-Math.abs(z));
}

/** The probability of all tables with the same sums that are at most as probable as the one found. */
function fisherPValue(both: number, upI: number, upJ: number, shots: number): number {
  const least = Math.max(0, upI + upJ - shots);
  const most = Math.min(upI, upJ);
  const logWays = (n: number, m: number) => logGamma(n + 1) - logGamma(m + 1) - logGamma(n - m + 1);
  const all = logWays(shots, upJ);
  const probability = (n: number) => Math.exp(logWays(upI, n) + logWays(shots - upI, upJ - n) - all);
  const found = probability(both) * TIES;
  let sum = 0;
  for (let n = least; n <= most; n++) {
    const here = probability(n);
    if (here <= found) sum += here;
  }
  return Math.min(1, sum);
}
