import type { CountTally } from "@/lib/science/detection/count-tally";

/** A two-component Poisson mixture; `dark` ≤ `bright` are mean counts, `brightWeight` the share of bright shots. */
export interface MixtureParameters {
  dark: number;
  bright: number;
  brightWeight: number;
}

/** First and second derivatives of the log likelihood in (ln dark, ln bright, logit brightWeight). */
export interface MixtureDerivatives {
  /** `[parameter]` */
  gradient: Float64Array;
  /** `[parameter][parameter]`: minus the second derivatives, the observed information. */
  information: Float64Array;
}

/** Returns ln of weight · Poisson(n; rate) · n!; a rate of 0 allows no count but 0. */
function logTerm(logWeight: number, rate: number, logRate: number, n: number): number {
  return n === 0 ? logWeight - rate : logWeight - rate + n * logRate;
}

/** Returns the log likelihood of the tally, including the factorials. */
export function mixtureLogLikelihood(tally: CountTally, parameters: MixtureParameters): number {
  const { counts, frequencies } = tally;
  const { dark, bright, brightWeight } = parameters;
  const logDark = Math.log(dark);
  const logBright = Math.log(bright);
  const logDarkWeight = Math.log1p(-brightWeight);
  const logBrightWeight = Math.log(brightWeight);
  let sum = -tally.logFactorials;
  for (let e = 0; e < counts.length; e++) {
    const d = logTerm(logDarkWeight, dark, logDark, counts[e]);
    const b = logTerm(logBrightWeight, bright, logBright, counts[e]);
    sum += frequencies[e] * (Math.max(d, b) + Math.log1p(Math.exp(-Math.abs(d - b))));
  }
  return sum;
}

/** Returns the log likelihood of one Poisson law with the tally's mean, its maximum. */
export function singleLogLikelihood(tally: CountTally): number {
  if (tally.mean === 0) return 0;
  return tally.shots * tally.mean * (Math.log(tally.mean) - 1) - tally.logFactorials;
}

/** Writes to `out[entry]` the probability that a shot with that count was bright. */
export function brightProbabilities(tally: CountTally, parameters: MixtureParameters, out: Float64Array): void {
  const { counts } = tally;
  const { dark, bright, brightWeight } = parameters;
  const logDark = Math.log(dark);
  const logBright = Math.log(bright);
  const logDarkWeight = Math.log1p(-brightWeight);
  const logBrightWeight = Math.log(brightWeight);
  for (let e = 0; e < counts.length; e++) {
    const d = logTerm(logDarkWeight, dark, logDark, counts[e]);
    const b = logTerm(logBrightWeight, bright, logBright, counts[e]);
    out[e] = 1 / (1 + Math.exp(d - b));
  }
}

/** Returns the parameters after one EM step (Dempster, Laird and Rubin 1977); the likelihood never falls. */
export function stepMixtureByEm(tally: CountTally, parameters: MixtureParameters): MixtureParameters {
  const { counts, frequencies, shots } = tally;
  const probabilities = new Float64Array(counts.length);
  brightProbabilities(tally, parameters, probabilities);
  let brightShots = 0;
  let brightSum = 0;
  let darkShots = 0;
  let darkSum = 0;
  for (let e = 0; e < counts.length; e++) {
    const asBright = frequencies[e] * probabilities[e];
    const asDark = frequencies[e] * (1 - probabilities[e]);
    brightShots += asBright;
    brightSum += asBright * counts[e];
    darkShots += asDark;
    darkSum += asDark * counts[e];
  }
  if (brightShots === 0 || darkShots === 0) return parameters;
  return { dark: darkSum / darkShots, bright: brightSum / brightShots, brightWeight: brightShots / shots };
}

/** Returns gradient and observed information at parameters in the interior (dark > 0). */
export function mixtureDerivatives(tally: CountTally, parameters: MixtureParameters): MixtureDerivatives {
  const { counts, frequencies } = tally;
  const { dark, bright, brightWeight } = parameters;
  const probabilities = new Float64Array(counts.length);
  brightProbabilities(tally, parameters, probabilities);
  const gradient = new Float64Array(3);
  const information = new Float64Array(9);
  for (let e = 0; e < counts.length; e++) {
    const f = frequencies[e];
    const w = probabilities[e];
    const fromDark = counts[e] - dark;
    const fromBright = counts[e] - bright;
    gradient[0] += f * (1 - w) * fromDark;
    gradient[1] += f * w * fromBright;
    gradient[2] += f * (w - brightWeight);
    // What is lost by not knowing the shot's state: the variance of the complete-data score (Louis 1982).
    const unknown = f * w * (1 - w);
    information[0] += f * (1 - w) * dark - unknown * fromDark * fromDark;
    information[1] += unknown * fromDark * fromBright;
    information[2] += unknown * fromDark;
    information[4] += f * w * bright - unknown * fromBright * fromBright;
    information[5] -= unknown * fromBright;
    information[8] += f * brightWeight * (1 - brightWeight) - unknown;
  }
  information[3] = information[1];
  information[6] = information[2];
  information[7] = information[5];
  return { gradient, information };
}
