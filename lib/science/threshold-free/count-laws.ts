import { brightLeakageDensity, darkLeakageDensity } from "@/lib/science/detection/leakage-density";
import { negativeBinomialDensity } from "@/lib/science/detection/negative-binomial-density";
import { poissonDensity } from "@/lib/science/stats/gamma-functions";
import { poissonSurvival } from "@/lib/science/stats/special-functions";

/** How probable each count of a site is when it is dark and when it is bright. */
export interface CountLaw {
  /** `[bin]`, P(n | dark); bin n is the count n, the last bin every count from its own on. */
  dark: Float64Array;
  /** `[bin]`, P(n | bright), as many bins. */
  bright: Float64Array;
  /** The share of bright shots for which weights are made best; any other leaves them unbiased. */
  brightWeight: number;
}

/** The components fitted to one site's whole counts, Poisson but for what else is given. */
export interface FittedComponents {
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

/** Bins reach this many standard deviations beyond the bright mean. */
const TAIL_DEVIATIONS = 12;
const LEAST_TAIL = 20;

/** No count of a run lies beyond. */
const MOST_BINS = 65536;

/** Returns the bins that hold a law with this mean and variance: the last one's share is negligible, or a long tail in one. */
function binsFor(mean: number, variance: number): number {
  return Math.ceil(mean + TAIL_DEVIATIONS * Math.sqrt(variance)) + LEAST_TAIL;
}

/** Returns the law of fitted components: with leakage where a leak is given, negative binomial where an excess is, else Poisson. */
export function fittedCountLaw(components: FittedComponents): CountLaw {
  const { dark, bright, brightWeight, leakDark, leakBright, darkExcess, brightExcess } = components;
  if (leakDark !== undefined || leakBright !== undefined) {
    const law = { dark, bright, leakDark: leakDark ?? 0, leakBright: leakBright ?? 0 };
    return countLawOf((n) => darkLeakageDensity(n, law), (n) => brightLeakageDensity(n, law), brightWeight, binsFor(bright, bright));
  }
  if (darkExcess !== undefined || brightExcess !== undefined) {
    const bins = Math.min(MOST_BINS, binsFor(bright, bright + (brightExcess ?? 0) * bright * bright));
    return countLawOf((n) => negativeBinomialDensity(n, dark, darkExcess ?? 0), (n) => negativeBinomialDensity(n, bright, brightExcess ?? 0), brightWeight, bins);
  }
  return poissonCountLaw(components);
}

/** Returns the law of two Poisson components. */
export function poissonCountLaw({ dark, bright, brightWeight }: Pick<FittedComponents, "dark" | "bright" | "brightWeight">): CountLaw {
  const bins = binsFor(bright, bright);
  return { dark: poissonBins(dark, bins), bright: poissonBins(bright, bins), brightWeight };
}

/**
 * Returns the law of any two densities over whole counts from 0, on `bins` bins; what they leave of 1 is put into the last bin.
 * Throws RangeError where a density is negative or adds up to more than 1 by more than rounding.
 */
export function countLawOf(dark: (n: number) => number, bright: (n: number) => number, brightWeight: number, bins: number): CountLaw {
  return { dark: densityBins(dark, bins), bright: densityBins(bright, bins), brightWeight };
}

function poissonBins(rate: number, bins: number): Float64Array {
  return Float64Array.from({ length: bins }, (_, n) => (n < bins - 1 ? poissonDensity(n, rate) : poissonSurvival(n - 1, rate)));
}

function densityBins(density: (n: number) => number, bins: number): Float64Array {
  const shares = new Float64Array(bins);
  let sum = 0;
  for (let n = 0; n < bins - 1; n++) {
    shares[n] = density(n);
    sum += shares[n];
  }
  if (!(sum <= 1 + 1e-9) || shares.some((share) => !(share >= 0))) throw new RangeError(`The count densities add up to ${sum}`);
  shares[bins - 1] = Math.max(0, 1 - sum);
  return shares;
}
