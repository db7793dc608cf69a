import type { BrightIs } from "@/lib/science/correlators/packed-spins";
import { invertPositiveDefinite } from "@/lib/science/stats/cholesky";
import type { CountLaw } from "@/lib/science/threshold-free/count-laws";
import type { PairTally } from "@/lib/science/threshold-free/pair-tally";

/** The joint outcomes of two sites that make their counts most likely. */
export interface PairOutcomeFit {
  /** Shares of `[++, +−, −+, −−]`. */
  shares: [number, number, number, number];
  meanI: number;
  meanJ: number;
  /** C = p₊₊ + p₋₋ − p₊₋ − p₋₊ − ⟨σ_i⟩⟨σ_j⟩ */
  correlator: number;
  /** Of the correlator, from the observed information; NaN where that is singular. */
  error: number;
  /** Per shot, without what no share moves. */
  logLikelihood: number;
  iterations: number;
  /** False when the shares still moved after the last iteration. */
  converged: boolean;
}

const OUTCOMES = 4;
/** No share may move by more in the last iteration. */
const STILL = 1e-8;

/**
 * Returns the maximum-likelihood shares of a pair's four outcomes given both sites' laws of counts, by expectation-maximisation
 * (Dempster, Laird and Rubin 1977): each cell's shots are shared among the outcomes by their posterior probabilities, and the shares
 * become the averages of those. The likelihood is concave in the shares and rises with every iteration, so it ends at the one maximum.
 * Cells that no outcome gives are left out. Values NaN without shots.
 */
export function fitPairOutcomes(tally: PairTally, lawI: CountLaw, lawJ: CountLaw, brightIs: BrightIs, mostIterations = 2000): PairOutcomeFit {
  const { likelihood, frequencies, shots } = cellLikelihoods(tally, lawI, lawJ, brightIs);
  const shares = new Float64Array(OUTCOMES).fill(shots > 0 ? 1 / OUTCOMES : Number.NaN);
  const next = new Float64Array(OUTCOMES);
  let iterations = 0;
  let converged = shots === 0;
  let logLikelihood = Number.NaN;
  while (!converged && iterations < mostIterations) {
    logLikelihood = improveShares(likelihood, frequencies, shots, shares, next);
    const moved = shares.reduce((most, share, a) => Math.max(most, Math.abs(next[a] - share)), 0);
    shares.set(next);
    iterations += 1;
    converged = moved <= STILL;
  }
  const [bothUp, onlyI, onlyJ, bothDown] = shares;
  const meanI = bothUp + onlyI - onlyJ - bothDown;
  const meanJ = bothUp - onlyI + onlyJ - bothDown;
  const correlator = bothUp + bothDown - onlyI - onlyJ - meanI * meanJ;
  const error = correlatorError(likelihood, frequencies, shares, meanI, meanJ);
  return { shares: [bothUp, onlyI, onlyJ, bothDown], meanI, meanJ, correlator, error, logLikelihood, iterations, converged };
}

/** `[cell][outcome]`, of the cells that any outcome gives. */
function cellLikelihoods({ binI, binJ, frequencies }: PairTally, lawI: CountLaw, lawJ: CountLaw, brightIs: BrightIs) {
  const up = (law: CountLaw) => (brightIs === "up" ? law.bright : law.dark);
  const down = (law: CountLaw) => (brightIs === "up" ? law.dark : law.bright);
  const likelihood = new Float64Array(binI.length * OUTCOMES);
  const kept = new Float64Array(binI.length);
  let cell = 0;
  let shots = 0;
  for (let c = 0; c < binI.length; c++) {
    const upI = up(lawI)[binI[c]];
    const downI = down(lawI)[binI[c]];
    const upJ = up(lawJ)[binJ[c]];
    const downJ = down(lawJ)[binJ[c]];
    // Outcomes are compared within a cell only, so each site's scale is free: far tails must not underflow.
    const scale = Math.max(upI, downI) * Math.max(upJ, downJ);
    if (!(scale > 0)) continue;
    likelihood.set([upI * upJ, upI * downJ, downI * upJ, downI * downJ].map((p) => p / scale), cell * OUTCOMES);
    kept[cell] = frequencies[c];
    shots += frequencies[c];
    cell += 1;
  }
  return { likelihood: likelihood.subarray(0, cell * OUTCOMES), frequencies: kept.subarray(0, cell), shots };
}

/** Writes the next shares; returns the log likelihood per shot of the present ones. */
function improveShares(likelihood: Float64Array, frequencies: Float64Array, shots: number, shares: Float64Array, next: Float64Array): number {
  const [p0, p1, p2, p3] = shares;
  let n0 = 0;
  let n1 = 0;
  let n2 = 0;
  let n3 = 0;
  let logLikelihood = 0;
  for (let c = 0, at = 0; c < frequencies.length; c++, at += OUTCOMES) {
    const mixed = p0 * likelihood[at] + p1 * likelihood[at + 1] + p2 * likelihood[at + 2] + p3 * likelihood[at + 3];
    const each = frequencies[c] / mixed;
    n0 += each * likelihood[at];
    n1 += each * likelihood[at + 1];
    n2 += each * likelihood[at + 2];
    n3 += each * likelihood[at + 3];
    logLikelihood += frequencies[c] * Math.log(mixed);
  }
  next[0] = (p0 * n0) / shots;
  next[1] = (p1 * n1) / shots;
  next[2] = (p2 * n2) / shots;
  next[3] = (p3 * n3) / shots;
  return logLikelihood / shots;
}

/** Standard error of C by the delta method; three shares are free, the fourth is what they leave. */
function correlatorError(likelihood: Float64Array, frequencies: Float64Array, shares: Float64Array, meanI: number, meanJ: number): number {
  const information = new Float64Array(9);
  for (let c = 0, at = 0; c < frequencies.length; c++, at += OUTCOMES) {
    const last = likelihood[at + 3];
    const mixed = shares[0] * likelihood[at] + shares[1] * likelihood[at + 1] + shares[2] * likelihood[at + 2] + shares[3] * last;
    for (let a = 0; a < 3; a++) {
      const slope = (frequencies[c] * (likelihood[at + a] - last)) / (mixed * mixed);
      for (let b = 0; b < 3; b++) information[3 * a + b] += slope * (likelihood[at + b] - last);
    }
  }
  const covariance = invertPositiveDefinite(information, 3);
  if (covariance === null) return Number.NaN;
  // ∂C/∂p_a − ∂C/∂p₋₋, with ∂C/∂p = σ_iσ_j − σ_i⟨σ_j⟩ − σ_j⟨σ_i⟩
  const slopes = [-2 * meanI - 2 * meanJ, -2 - 2 * meanJ, -2 - 2 * meanI];
  let variance = 0;
  for (let a = 0; a < 3; a++) for (let b = 0; b < 3; b++) variance += slopes[a] * slopes[b] * covariance[3 * a + b];
  return Math.sqrt(variance);
}
