/** Thresholds on whole counts and what they cost: a site reads bright when its count is above θ, strictly. */
import { poissonCdf, poissonSurvival } from "@/lib/science/stats/special-functions";

/** Error rates of a threshold: ε_d = P(reads bright | dark), ε_b = P(reads dark | bright). */
export interface ErrorRates {
  falseBright: number;
  falseDark: number;
}

/** Returns ε_d and ε_b of threshold θ for Poisson counts with mean `dark` and `bright`. */
export function poissonErrorRates(threshold: number, dark: number, bright: number): ErrorRates {
  return { falseBright: poissonSurvival(threshold, dark), falseDark: poissonCdf(threshold, bright) };
}

/**
 * Returns the half-integer with the least ε_d + ε_b for Poisson counts, 0 ≤ dark < bright; of equals the lowest.
 * Raising θ past count n pays while Poisson(n; bright) < Poisson(n; dark), that is n ln(bright/dark) < bright − dark.
 */
export function advisePoissonThreshold(dark: number, bright: number): number {
  if (dark === 0) return 0.5;
  const balance = (bright - dark) / Math.log(bright / dark);
  return Math.max(0, Math.ceil(balance) - 1) + 0.5;
}
