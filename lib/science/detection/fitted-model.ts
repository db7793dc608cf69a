import type { CalibratedRates } from "@/lib/science/detection/calibration";
import type { CountModel, CountModelName, ModelComponents } from "@/lib/science/detection/count-model";
import type { CountModelFit } from "@/lib/science/detection/count-model-fit";
import { matchBeta, mixtureErrorRates } from "@/lib/science/detection/mixture-error-rates";
import type { TwoComponents } from "@/lib/science/detection/poisson-mixture";
import { advisePoissonThreshold, type ErrorRates } from "@/lib/science/detection/threshold";
import type { Interval } from "@/lib/science/stats/intervals";

/** Two components fitted to one site's counts, under any model. */
export interface FittedModel {
  kind: "two-components";
  model: CountModelName;
  /** With the standard errors of the two rates. */
  components: ModelComponents & { darkError: number; brightError: number };
  shots: number;
  logLikelihood: number;
  parameters: number;
  /** The half-integer with the least ε_d + ε_b; of equals the lowest. */
  advised: number;
  /** ε's, intervals and evidence of a threshold. */
  ratesAt: (threshold: number) => CalibratedRates;
}

const POISSON_PARAMETERS = 3;
const Z_95 = 1.959963984540054;
const DIFFERENCE = 1e-4;

/** Returns the Poisson mixture as a fitted model. */
export function poissonModel(fit: TwoComponents): FittedModel {
  const { dark, bright, brightWeight, darkError, brightError, shots, logLikelihood } = fit;
  return {
    kind: "two-components",
    model: "poisson",
    components: { dark, bright, brightWeight, darkError, brightError },
    shots,
    logLikelihood,
    parameters: POISSON_PARAMETERS,
    advised: advisePoissonThreshold(dark, bright),
    ratesAt: (threshold) => mixtureErrorRates(fit, threshold),
  };
}

/** Returns a richer fit as a fitted model; `shots` in all. */
export function richerModel(model: CountModel, { place, covariance, logLikelihood }: CountModelFit, shots: number): FittedModel {
  const components = model.components(place);
  const errorOf = (parameter: number) => Math.sqrt(covariance[parameter * place.length + parameter]);
  const { dark, bright, brightWeight } = components;
  return {
    kind: "two-components",
    model: model.name,
    components: { ...components, darkError: dark * errorOf(0), brightError: bright * errorOf(1) },
    shots,
    logLikelihood,
    parameters: model.parameters,
    advised: bestThreshold(model, components),
    ratesAt: (threshold) => ratesWithErrors(model, place, covariance, threshold, [shots * (1 - brightWeight), shots * brightWeight]),
  };
}

/** Returns ε_d and ε_b of a threshold by summing the densities up to it. */
function errorRatesOf(model: CountModel, components: ModelComponents, threshold: number): ErrorRates {
  let darkUpTo = 0;
  let brightUpTo = 0;
  for (let n = 0; n <= threshold; n++) {
    darkUpTo += model.darkDensity(n, components);
    brightUpTo += model.brightDensity(n, components);
  }
  return { falseBright: clampShare(1 - darkUpTo), falseDark: clampShare(brightUpTo) };
}

function clampShare(share: number): number {
  return Math.min(1, Math.max(0, share));
}

/** Raising θ past count n pays while bright shots have n less often than dark ones; the best lies below the bright mean. */
function bestThreshold(model: CountModel, components: ModelComponents): number {
  let gain = 0;
  let best = { threshold: 0.5, sum: Number.POSITIVE_INFINITY };
  for (let n = 0; n <= Math.ceil(components.bright); n++) {
    gain += model.brightDensity(n, components) - model.darkDensity(n, components);
    if (gain < best.sum - 1e-15) best = { threshold: n + 0.5, sum: gain };
  }
  return best.threshold;
}

function ratesWithErrors(model: CountModel, place: Float64Array, covariance: Float64Array, threshold: number, shots: [number, number]): CalibratedRates {
  const rates = errorRatesOf(model, model.components(place), threshold);
  const [darkError, brightError] = rateErrors(model, place, covariance, threshold);
  return {
    ...rates,
    falseBrightInterval: shareInterval(rates.falseBright, darkError),
    falseDarkInterval: shareInterval(rates.falseDark, brightError),
    evidence: { dark: matchBeta(rates.falseBright, darkError, shots[0]), bright: matchBeta(rates.falseDark, brightError, shots[1]) },
  };
}

/** Standard errors of ε_d and ε_b by the delta method. */
function rateErrors(model: CountModel, place: Float64Array, covariance: Float64Array, threshold: number): [number, number] {
  const size = place.length;
  const slopes = Array.from(place, (_, parameter) => {
    const at = (by: number) => errorRatesOf(model, model.components(place.map((value, m) => (m === parameter ? value + by : value))), threshold);
    const [above, below] = [at(DIFFERENCE), at(-DIFFERENCE)];
    return { falseBright: (above.falseBright - below.falseBright) / (2 * DIFFERENCE), falseDark: (above.falseDark - below.falseDark) / (2 * DIFFERENCE) };
  });
  const errorOf = (rate: keyof ErrorRates) => {
    let variance = 0;
    for (let m = 0; m < size; m++) for (let q = 0; q < size; q++) variance += slopes[m][rate] * covariance[m * size + q] * slopes[q][rate];
    return Math.sqrt(Math.max(0, variance));
  };
  return [errorOf("falseBright"), errorOf("falseDark")];
}

/** 95 % on the logit scale, so that it stays between 0 and 1. */
function shareInterval(share: number, error: number): Interval {
  if (share <= 0 || share >= 1 || error === 0) return [share, share];
  const odds = share / (1 - share);
  const stretch = Math.exp((Z_95 * error) / (share * (1 - share)));
  return [odds / stretch / (1 + odds / stretch), (odds * stretch) / (1 + odds * stretch)];
}
