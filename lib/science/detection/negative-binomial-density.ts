import { logGamma } from "@/lib/science/stats/gamma-functions";
import { poissonDensity } from "@/lib/science/stats/gamma-functions";

/** Below this the law is the Poisson law to rounding. */
const LEAST_EXCESS = 1e-9;

/**
 * Returns P(n) of the negative binomial law with mean μ and variance μ + ν μ², ν ≥ 0: Poisson counts whose mean itself varies
 * (gamma law of shape 1/ν), as gain noise makes it; Poisson at ν = 0.
 */
export function negativeBinomialDensity(n: number, mean: number, excess: number): number {
  if (mean === 0) return n === 0 ? 1 : 0;
  if (excess < LEAST_EXCESS) return poissonDensity(n, mean);
  const shape = 1 / excess;
  const spread = excess * mean;
  const log = logGamma(n + shape) - logGamma(shape) - logGamma(n + 1) + n * Math.log(spread / (1 + spread)) - shape * Math.log1p(spread);
  return Math.exp(log);
}
