import { tallyCounts, type CountTally } from "@/lib/science/detection/count-tally";
import { climbByEm, climbByNewton, type AscentResult } from "@/lib/science/detection/poisson-mixture-ascent";
import {
  mixtureDerivatives,
  mixtureLogLikelihood,
  singleLogLikelihood,
  type MixtureParameters,
} from "@/lib/science/detection/poisson-mixture-likelihood";
import { mixtureStarts } from "@/lib/science/detection/poisson-mixture-starts";
import { invertPositiveDefinite } from "@/lib/science/stats/cholesky";

/** Two components, with the maximum likelihood and standard errors from the observed information. */
export interface TwoComponents extends MixtureParameters {
  kind: "two-components";
  /** Standard errors; `dark` is 0 where the dark rate is 0, the edge of its range. */
  darkError: number;
  brightError: number;
  brightWeightError: number;
  shots: number;
  logLikelihood: number;
  /** Log likelihood gained over one Poisson law. */
  gain: number;
  iterations: number;
}

/** Why a site's counts show one component only. */
export type SingleReason = "no-shots" | "all-zero" | "all-equal" | "one-component";

/** One component: nothing is known of the other, so no rate is made up for it. */
export interface OneComponent {
  kind: "one-component";
  reason: SingleReason;
  /** Mean count; NaN without shots. */
  rate: number;
  shots: number;
}

const CLIMBED = 3;

/**
 * Returns the maximum-likelihood two-component Poisson mixture of `frequencies[count]` (counts from 0), by EM from
 * several starts and Newton steps to rounding; labels are ordered, dark < bright. It counts as two components
 * only when BIC prefers it to one Poisson law, 2 · gain > 2 ln shots: the likelihood ratio is not χ² here, and BIC
 * finds the number of components consistently (Keribin 2000).
 */
export function fitPoissonMixture(frequencies: ArrayLike<number>): TwoComponents | OneComponent {
  const tally = tallyCounts(frequencies);
  const trivial = trivialReason(tally);
  if (trivial !== null) return oneComponent(tally, trivial);
  const best = climb(tally);
  const single = singleLogLikelihood(tally);
  if (best === null || !(best.logLikelihood - single > Math.log(tally.shots))) {
    return oneComponent(tally, "one-component");
  }
  const errors = standardErrors(tally, best.parameters);
  if (errors === null) return oneComponent(tally, "one-component");
  return {
    kind: "two-components",
    ...best.parameters,
    ...errors,
    shots: tally.shots,
    logLikelihood: best.logLikelihood,
    gain: best.logLikelihood - single,
    iterations: best.iterations,
  };
}

function oneComponent(tally: CountTally, reason: SingleReason): OneComponent {
  return { kind: "one-component", reason, rate: tally.mean, shots: tally.shots };
}

function trivialReason(tally: CountTally): SingleReason | null {
  if (tally.counts.length === 0) return "no-shots";
  if (tally.counts.length > 1) return null;
  return tally.counts[0] === 0 ? "all-zero" : "all-equal";
}

function climb(tally: CountTally): AscentResult | null {
  const byLikelihood = (a: AscentResult, b: AscentResult) => b.logLikelihood - a.logLikelihood;
  const promising = mixtureStarts(tally)
    .map((start) => climbByEm(tally, start))
    .sort(byLikelihood)
    .slice(0, CLIMBED);
  const results = promising.map((start) => ordered(climbByNewton(tally, start)));
  const silent = fitSilentDark(tally);
  const best = results.sort(byLikelihood).at(0) ?? null;
  if (silent === null || (best !== null && best.converged && best.logLikelihood > silent.logLikelihood)) return best;
  const rounding = 1e-12 * Math.abs(silent.logLikelihood);
  return best !== null && best.logLikelihood > silent.logLikelihood + rounding ? best : silent;
}

function ordered(result: AscentResult): AscentResult {
  const { dark, bright, brightWeight } = result.parameters;
  if (dark <= bright) return result;
  return { ...result, parameters: { dark: bright, bright: dark, brightWeight: 1 - brightWeight } };
}

/**
 * Returns the best mixture whose dark shots never count, dark = 0: the edge that steps in ln dark cannot reach.
 * There bright/(1 − e^(−bright)) is the mean of the counts above 0. Null when no such mixture exists.
 */
function fitSilentDark(tally: CountTally): AscentResult | null {
  const zeros = tally.counts[0] === 0 ? tally.frequencies[0] : 0;
  const positive = (tally.mean * tally.shots) / (tally.shots - zeros);
  if (zeros === 0 || !(positive > 1 + 1e-9)) return null;
  let bright = positive;
  for (let step = 0; step < 200; step++) {
    const seen = -Math.expm1(-bright);
    const slope = (seen - bright * Math.exp(-bright)) / (seen * seen);
    const next = Math.max(bright - (bright / seen - positive) / slope, 0.1 * bright);
    if (Math.abs(next - bright) <= 1e-15 * bright) break;
    bright = next;
  }
  const brightWeight = (1 - zeros / tally.shots) / -Math.expm1(-bright);
  if (!(brightWeight < 1)) return null;
  const parameters = { dark: 0, bright, brightWeight };
  return { parameters, logLikelihood: mixtureLogLikelihood(tally, parameters), iterations: 0, converged: true };
}

type MixtureErrors = Pick<TwoComponents, "darkError" | "brightError" | "brightWeightError">;

function standardErrors(tally: CountTally, parameters: MixtureParameters): MixtureErrors | null {
  const { dark, bright, brightWeight } = parameters;
  const { information } = mixtureDerivatives(tally, parameters);
  // With dark = 0 its logarithm is no parameter and its row is zero: a unit in its place leaves the others alone.
  if (dark === 0) information[0] = 1;
  const covariance = invertPositiveDefinite(information, 3);
  if (covariance === null) return null;
  return {
    darkError: dark * Math.sqrt(covariance[0]),
    brightError: bright * Math.sqrt(covariance[4]),
    brightWeightError: brightWeight * (1 - brightWeight) * Math.sqrt(covariance[8]),
  };
}
