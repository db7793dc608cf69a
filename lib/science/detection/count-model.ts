import { brightLeakageDensity, darkLeakageDensity } from "@/lib/science/detection/leakage-density";
import { negativeBinomialDensity } from "@/lib/science/detection/negative-binomial-density";
import type { TwoComponents } from "@/lib/science/detection/poisson-mixture";

/** What the counts of a bright and of a dark site are taken to follow. */
export type CountModelName = "poisson" | "leakage" | "negative-binomial";

/** The parameters of a fitted model in words; what a model lacks is left out. */
export interface ModelComponents {
  dark: number;
  bright: number;
  brightWeight: number;
  /** Chance per count of signal to leave the state within the window. */
  leakDark?: number;
  leakBright?: number;
  /** Variance beyond Poisson, in units of mean². */
  darkExcess?: number;
  brightExcess?: number;
}

/** A mixture of two count laws with free parameters on the whole line (logarithms, logit). */
export interface CountModel {
  name: Exclude<CountModelName, "poisson">;
  /** Free parameters a site. */
  parameters: number;
  /** Where a fit starts, from the Poisson mixture of the same counts. */
  start(fit: TwoComponents): Float64Array;
  components(place: Float64Array): ModelComponents;
  darkDensity(n: number, components: ModelComponents): number;
  brightDensity(n: number, components: ModelComponents): number;
}

/** ln of the smallest leak or excess that a fit can tell from none. */
export const LEAST_LOG = -14;
const SMALL_LEAK = 0.003;
const SMALL_EXCESS = 0.02;
const LEAST_RATE = 1e-6;

function rates(fit: TwoComponents): [number, number, number] {
  const weight = Math.min(1 - 1e-9, Math.max(1e-9, fit.brightWeight));
  return [Math.log(Math.max(fit.dark, LEAST_RATE)), Math.log(fit.bright), Math.log(weight / (1 - weight))];
}

function shared(place: Float64Array): Pick<ModelComponents, "dark" | "bright" | "brightWeight"> {
  return { dark: Math.exp(place[0]), bright: Math.exp(place[1]), brightWeight: 1 / (1 + Math.exp(-place[2])) };
}

/**
 * Shots that leave either state fill the gap between the peaks alike, so a mixture tells how many leak, not in which direction: one leak for
 * both states.
 */
const LEAKAGE: CountModel = {
  name: "leakage",
  parameters: 4,
  start: (fit) => Float64Array.of(...rates(fit), Math.log(SMALL_LEAK)),
  components: (place) => ({ ...shared(place), leakDark: Math.exp(place[3]), leakBright: Math.exp(place[3]) }),
  darkDensity: (n, { dark, bright, leakDark = 0, leakBright = 0 }) => darkLeakageDensity(n, { dark, bright, leakDark, leakBright }),
  brightDensity: (n, { dark, bright, leakDark = 0, leakBright = 0 }) => brightLeakageDensity(n, { dark, bright, leakDark, leakBright }),
};

const NEGATIVE_BINOMIAL: CountModel = {
  name: "negative-binomial",
  parameters: 5,
  start: (fit) => Float64Array.of(...rates(fit), Math.log(SMALL_EXCESS), Math.log(SMALL_EXCESS)),
  components: (place) => ({ ...shared(place), darkExcess: Math.exp(place[3]), brightExcess: Math.exp(place[4]) }),
  darkDensity: (n, { dark, darkExcess = 0 }) => negativeBinomialDensity(n, dark, darkExcess),
  brightDensity: (n, { bright, brightExcess = 0 }) => negativeBinomialDensity(n, bright, brightExcess),
};

/** The models beside two Poisson components. */
export const RICHER_MODELS: Readonly<Record<CountModel["name"], CountModel>> = { leakage: LEAKAGE, "negative-binomial": NEGATIVE_BINOMIAL };
