import type { CovarianceMoments } from "@/lib/science/correlators/bootstrap-law";
import type { SoftSpins } from "@/lib/science/threshold-free/soft-spins";

/** Sums over the shots of one evolution time. */
export interface SoftSums {
  /** `[site]`, mean soft spin. */
  mean: Float64Array;
  /** `[site]`, mean squared deviation from it. */
  variance: Float64Array;
  /** `[site][shot]`, soft spins less their site's mean. */
  deviations: Float64Array;
}

/** Returns means, variances and deviations of all sites, NaN without shots. */
export function soften({ shots, sites, values }: SoftSpins): SoftSums {
  const mean = new Float64Array(sites);
  const variance = new Float64Array(sites);
  const deviations = new Float64Array(values.length);
  for (let i = 0; i < sites; i++) {
    let sum = 0;
    for (let s = i * shots; s < (i + 1) * shots; s++) sum += values[s];
    mean[i] = sum / shots;
    let squares = 0;
    for (let s = i * shots; s < (i + 1) * shots; s++) {
      const deviation = values[s] - mean[i];
      deviations[s] = deviation;
      squares += deviation * deviation;
    }
    variance[i] = squares / shots;
  }
  return { mean, variance, deviations };
}

/** Returns the plug-in covariance of two sites' soft spins. */
export function softCovariance({ deviations }: SoftSums, shots: number, i: number, j: number): number {
  let sum = 0;
  for (let s = 0, a = i * shots, b = j * shots; s < shots; s++) sum += deviations[a + s] * deviations[b + s];
  return sum / shots;
}

/** Returns what the bootstrap law of a pair's covariance c needs. */
export function softPairMoments({ variance, deviations }: SoftSums, shots: number, i: number, j: number, c: number): CovarianceMoments {
  let uuv = 0;
  let uvv = 0;
  let w2 = 0;
  let w3 = 0;
  let w4 = 0;
  let uw2 = 0;
  let vw2 = 0;
  for (let s = 0, a = i * shots, b = j * shots; s < shots; s++) {
    const u = deviations[a + s];
    const v = deviations[b + s];
    const uv = u * v;
    const w = uv - c;
    const ww = w * w;
    uuv += u * uv;
    uvv += uv * v;
    w2 += ww;
    w3 += ww * w;
    w4 += ww * ww;
    uw2 += u * ww;
    vw2 += v * ww;
  }
  return {
    c,
    uu: variance[i],
    vv: variance[j],
    uuv: uuv / shots,
    uvv: uvv / shots,
    w2: w2 / shots,
    w3: w3 / shots,
    w4: w4 / shots,
    uw2: uw2 / shots,
    vw2: vw2 / shots,
  };
}

/**
 * Returns the soft counts `[++, +−, −+, −−]` of a pair with plug-in covariance c: in how many shots each outcome is estimated to have
 * occurred. They add up to M; noise can make one negative.
 */
export function softOutcomes(shots: number, meanI: number, meanJ: number, c: number): [number, number, number, number] {
  const both = c + meanI * meanJ;
  const quarter = shots / 4;
  return [
    quarter * (1 + meanI + meanJ + both),
    quarter * (1 + meanI - meanJ - both),
    quarter * (1 - meanI + meanJ - both),
    quarter * (1 - meanI - meanJ + both),
  ];
}
