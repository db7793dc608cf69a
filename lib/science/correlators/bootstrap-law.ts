import type { ErrorBar, IntervalKind } from "@/lib/science/correlators/error-bars";
import { bcaLevel } from "@/lib/science/stats/intervals";
import { normalQuantile } from "@/lib/science/stats/normal-quantile";
import { normalCdf } from "@/lib/science/stats/special-functions";

/**
 * The law of a bootstrap replicate of one number, as infinitely many replicates would show it, by its first four
 * cumulants. Quantiles follow by the expansion of Cornish and Fisher (1938), shares by that of Edgeworth (1905).
 */
export interface BootstrapLaw {
  mean: number;
  /** The bootstrap's standard error. */
  deviation: number;
  skewness: number;
  /** Fourth cumulant in units of deviation⁴. */
  excess: number;
}

/** Averages of f, f², f³, f⁴ over the replicates of a readout factor f = 1/F. */
export type FactorMoments = readonly [number, number, number, number];

/** From this many shots in each joint outcome on the expansions hold: their error is below the noise of 10 000 replicates. */
export const LEAST_REGULAR_OUTCOME = 25;

const LOW = 0.025;
const HIGH = 0.975;

/** Tells whether a pair's interval may be read from `pairLaw`. */
export function isRegular(outcomes: readonly number[]): boolean {
  return outcomes.every((shots) => shots >= LEAST_REGULAR_OUTCOME);
}

/**
 * Returns the law of the plug-in C of M shots drawn with replacement from a pair's joint outcomes `[++, +−, −+, −−]`,
 * M ≥ 2. Mean and variance are exact, third and fourth cumulant to leading order in 1/M. With u = σ_i − ⟨σ_i⟩, v = σ_j − ⟨σ_j⟩,
 * C* = mean*(uv) − mean*(u) mean*(v), a mean and a product of means; docs/validation.md derives the terms.
 */
export function pairLaw(outcomes: readonly [number, number, number, number]): BootstrapLaw {
  const shots = outcomes[0] + outcomes[1] + outcomes[2] + outcomes[3];
  const meanI = (outcomes[0] + outcomes[1] - outcomes[2] - outcomes[3]) / shots;
  const meanJ = (outcomes[0] - outcomes[1] + outcomes[2] - outcomes[3]) / shots;
  const c = (outcomes[0] - outcomes[1] - outcomes[2] + outcomes[3]) / shots - meanI * meanJ;
  let uuv = 0;
  let uvv = 0;
  let w2 = 0;
  let w3 = 0;
  let w4 = 0;
  let uw2 = 0;
  let vw2 = 0;
  for (let outcome = 0; outcome < 4; outcome++) {
    const share = outcomes[outcome] / shots;
    const u = (outcome < 2 ? 1 : -1) - meanI;
    const v = (outcome % 2 === 0 ? 1 : -1) - meanJ;
    const w = u * v - c;
    uuv += share * u * u * v;
    uvv += share * u * v * v;
    w2 += share * w * w;
    w3 += share * w * w * w;
    w4 += share * w * w * w * w;
    uw2 += share * u * w * w;
    vw2 += share * v * w * w;
  }
  return covarianceLaw({ c, uu: 1 - meanI * meanI, vv: 1 - meanJ * meanJ, uuv, uvv, w2, w3, w4, uw2, vw2 }, shots);
}

/** Averages over the shots of one pair, with u and v the deviations of the two readings from their means, and w = uv − c. */
export interface CovarianceMoments {
  /** Of u v: the plug-in C. */
  c: number;
  uu: number;
  vv: number;
  uuv: number;
  uvv: number;
  w2: number;
  w3: number;
  w4: number;
  uw2: number;
  vw2: number;
}

/** Returns the law of the plug-in covariance of M shots drawn with replacement, M ≥ 2, for readings of any kind; see `pairLaw`. */
export function covarianceLaw({ c, uu, vv, uuv, uvv, w2, w3, w4, uw2, vw2 }: CovarianceMoments, shots: number): BootstrapLaw {
  const products = (w2 + c * c + (shots - 1) * (uu * vv + 2 * c * c)) / shots ** 3 - (c / shots) ** 2;
  const variance = Math.max(0, (w2 * (1 - 2 / shots)) / shots + products);
  const third = (w3 - 6 * uuv * uvv) / shots ** 2;
  const curved = uvv * uvv * uu + 2 * uuv * uvv * c + uuv * uuv * vv;
  const fourth = (w4 - 3 * w2 * w2 - 12 * (uw2 * uvv + vw2 * uuv) + 12 * curved) / shots ** 3;
  return { mean: c * (1 - 1 / shots), ...inUnits(variance, third, fourth) };
}

function inUnits(variance: number, third: number, fourth: number): Omit<BootstrapLaw, "mean"> {
  const deviation = Math.sqrt(variance);
  if (deviation === 0) return { deviation, skewness: 0, excess: 0 };
  return { deviation, skewness: third / (variance * deviation), excess: fourth / (variance * variance) };
}

/** Returns the law of a number `scale` times as large, scale > 0. */
export function scaledLaw(law: BootstrapLaw, scale: number): BootstrapLaw {
  return { ...law, mean: law.mean * scale, deviation: law.deviation * scale };
}

/** Returns the law of the product with two independent readout factors. */
export function correctedLaw(law: BootstrapLaw, first: FactorMoments, second: FactorMoments): BootstrapLaw {
  const { mean, deviation, skewness, excess } = law;
  const second2 = deviation * deviation;
  const third = skewness * second2 * deviation;
  const fourth = (excess + 3) * second2 * second2;
  const raw1 = mean * first[0] * second[0];
  const raw2 = (mean * mean + second2) * first[1] * second[1];
  const raw3 = (mean ** 3 + 3 * mean * second2 + third) * first[2] * second[2];
  const raw4 = (mean ** 4 + 6 * mean * mean * second2 + 4 * mean * third + fourth) * first[3] * second[3];
  const variance = Math.max(0, raw2 - raw1 * raw1);
  const central3 = raw3 - 3 * raw1 * raw2 + 2 * raw1 ** 3;
  const central4 = raw4 - 4 * raw1 * raw3 + 6 * raw1 * raw1 * raw2 - 3 * raw1 ** 4;
  return { mean: raw1, ...inUnits(variance, central3, central4 - 3 * variance * variance) };
}

/** Returns the averages of the first four powers of the factors. */
export function factorMoments(factors: ArrayLike<number>): FactorMoments {
  const sums = [0, 0, 0, 0];
  for (let b = 0; b < factors.length; b++) {
    let power = 1;
    for (let m = 0; m < 4; m++) {
      power *= factors[b];
      sums[m] += power;
    }
  }
  const [first, second, third, fourth] = sums.map((sum) => sum / factors.length);
  return [first, second, third, fourth];
}

/** Returns the quantile at p in (0, 1). */
export function lawQuantile({ mean, deviation, skewness, excess }: BootstrapLaw, p: number): number {
  const z = normalQuantile(p);
  const zz = z * z;
  const bent = (skewness * (zz - 1)) / 6 + (excess * z * (zz - 3)) / 24 - (skewness * skewness * z * (2 * zz - 5)) / 36;
  return mean + deviation * (z + bent);
}

/** Returns the share of replicates below x, between 0 and 1. */
export function lawShareBelow({ mean, deviation, skewness, excess }: BootstrapLaw, x: number): number {
  if (deviation === 0) return mean < x ? 1 : 0;
  const z = (x - mean) / deviation;
  const zz = z * z;
  const skewed = (skewness * (zz - 1)) / 6;
  const flat = (excess * z * (zz - 3)) / 24;
  const twice = (skewness * skewness * z * (zz * zz - 10 * zz + 15)) / 72;
  const density = Math.exp(-zz / 2) / Math.sqrt(2 * Math.PI);
  return Math.min(1, Math.max(0, normalCdf(z) - density * (skewed + flat + twice)));
}

/** Returns error and 95 % interval of an estimate from its bootstrap law; the acceleration is read for BCa only. */
export function errorBarOfLaw(law: BootstrapLaw, estimate: number, kind: IntervalKind, acceleration: number): ErrorBar {
  const [lowLevel, highLevel] = kind === "bca" ? bcaLevels(law, estimate, acceleration) : [LOW, HIGH];
  const low = lawQuantile(law, lowLevel);
  const high = lawQuantile(law, highLevel);
  if (kind === "basic") return { error: law.deviation, low: 2 * estimate - high, high: 2 * estimate - low };
  return { error: law.deviation, low, high };
}

function bcaLevels(law: BootstrapLaw, estimate: number, acceleration: number): [number, number] {
  const bias = normalQuantile(lawShareBelow(law, estimate));
  return [bcaLevel(bias, acceleration, LOW) ?? LOW, bcaLevel(bias, acceleration, HIGH) ?? HIGH];
}
