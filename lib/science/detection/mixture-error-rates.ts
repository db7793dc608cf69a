/** Error rates of a threshold under a fitted Poisson mixture, with their own uncertainty. */
import type { CalibratedRates, ErrorTally } from "@/lib/science/detection/calibration";
import type { TwoComponents } from "@/lib/science/detection/poisson-mixture";
import { poissonErrorRates } from "@/lib/science/detection/threshold";
import { poissonDensity } from "@/lib/science/stats/gamma-functions";
import type { Interval } from "@/lib/science/stats/intervals";
import { poissonCdf, poissonSurvival } from "@/lib/science/stats/special-functions";

const Z_95 = 1.959963984540054;
const TAIL_95 = 0.025;

/**
 * Returns ε's of threshold θ under the mixture. Intervals (95 %) follow from the rates' standard errors (observed
 * information): λ · exp(± 1.96 SE/λ), carried through ε(λ), which is monotone. `evidence` is not counted: it holds the
 * Beta(x + ½, K − x + ½) with ε's mean and delta-method variance. Both are for each ε alone; their correlation is
 * left out.
 */
export function mixtureErrorRates(mixture: TwoComponents, threshold: number): CalibratedRates {
  const { dark, bright, darkError, brightError, brightWeight, shots } = mixture;
  const rates = poissonErrorRates(threshold, dark, bright);
  const [darkLow, darkHigh] = rateInterval(dark, darkError, shots * (1 - brightWeight));
  const [brightLow, brightHigh] = rateInterval(bright, brightError, shots * brightWeight);
  const last = Math.floor(threshold);
  // d/dλ P(N ≤ n) = −Poisson(n; λ)
  const darkSlope = last < 0 ? 0 : poissonDensity(last, dark);
  const brightSlope = last < 0 ? 0 : poissonDensity(last, bright);
  return {
    ...rates,
    falseBrightInterval: [poissonSurvival(threshold, darkLow), poissonSurvival(threshold, darkHigh)],
    falseDarkInterval: [poissonCdf(threshold, brightHigh), poissonCdf(threshold, brightLow)],
    evidence: {
      dark: matchBeta(rates.falseBright, darkSlope * darkError, shots * (1 - brightWeight)),
      bright: matchBeta(rates.falseDark, brightSlope * brightError, shots * brightWeight),
    },
  };
}

/** Returns the 95 % interval of a rate; for a rate of 0 in `shots` shots, the exact Poisson one. */
function rateInterval(rate: number, error: number, shots: number): Interval {
  if (rate === 0) return [0, -Math.log(TAIL_95) / shots];
  const stretch = Math.exp((Z_95 * error) / rate);
  return [rate / stretch, rate * stretch];
}

/**
 * Returns x and K such that Beta(x + ½, K − x + ½) has the given mean and standard error. Where x would be negative
 * (relative error above about 140 %) it is 0 and only the mean is kept. A rate or error of exactly 0 gives no
 * moments to match: then none of `shots` erred.
 */
export function matchBeta(mean: number, error: number, shots: number): ErrorTally {
  const together = (mean * (1 - mean)) / (error * error) - 1;
  if (mean === 0 || mean === 1 || !Number.isFinite(together)) return { errors: mean * shots, shots };
  const errors = mean * together - 0.5;
  if (errors >= 0) return { errors, shots: together - 1 };
  return { errors: 0, shots: Math.max(0, 0.5 / mean - 1) };
}
