/**
 * Draws from the common distributions, exact up to rounding; each consumes its stream in a fixed order, so a recorded
 * seed gives the same values again. Parameters outside the domain throw RangeError.
 */
import type { RandomStream } from "@/lib/science/stats/philox";
import { logGamma, logPoissonDensity } from "@/lib/science/stats/gamma-functions";
import { normalQuantile } from "@/lib/science/stats/normal-quantile";

const HALF_STEP = 2 ** -54;
/** Below this mean a search from zero is quick and exact; the rejection methods are proven from 10 on. */
const SEARCH_BELOW = 10;

/** Returns a uniform draw in the open interval (0, 1). */
function drawOpenUniform(stream: RandomStream): number {
  return stream.nextUniform() + HALF_STEP;
}

/** Returns a standard normal draw, by inversion of one uniform. */
export function drawNormal(stream: RandomStream): number {
  return normalQuantile(drawOpenUniform(stream));
}

/** Returns a draw of Gamma(shape, scale 1) for shape > 0 (Marsaglia and Tsang 2000). */
export function drawGamma(stream: RandomStream, shape: number): number {
  requireThat(shape > 0 && shape < Number.POSITIVE_INFINITY, `Gamma shape ${shape}`);
  if (shape < 1) {
    const boost = drawOpenUniform(stream) ** (1 / shape);
    return drawGamma(stream, shape + 1) * boost;
  }
  const d = shape - 1 / 3;
  const c = 1 / Math.sqrt(9 * d);
  for (;;) {
    const z = drawNormal(stream);
    const v = (1 + c * z) ** 3;
    const u = drawOpenUniform(stream);
    if (v > 0 && Math.log(u) < 0.5 * z * z + d - d * v + d * Math.log(v)) return d * v;
  }
}

/** Returns a draw of Beta(a, b) in [0, 1], a, b > 0, as a ratio of gammas. */
export function drawBeta(stream: RandomStream, a: number, b: number): number {
  const x = drawGamma(stream, a);
  const y = drawGamma(stream, b);
  return x + y === 0 ? a / (a + b) : x / (x + y);
}

/** Returns a draw of Poisson(rate), rate ≥ 0: search from zero, from a mean of 10 on Hörmann's PTRS (1993). */
export function drawPoisson(stream: RandomStream, rate: number): number {
  requireThat(rate >= 0 && rate < Number.POSITIVE_INFINITY, `Poisson rate ${rate}`);
  if (rate < SEARCH_BELOW) return searchPoisson(stream, rate);
  const b = 0.931 + 2.53 * Math.sqrt(rate);
  const a = -0.059 + 0.02483 * b;
  const inverseAlpha = 1.1239 + 1.1328 / (b - 3.4);
  const sure = 0.9277 - 3.6224 / (b - 2);
  for (;;) {
    const u = stream.nextUniform() - 0.5;
    const v = drawOpenUniform(stream);
    const margin = 0.5 - Math.abs(u);
    const n = Math.floor(((2 * a) / margin + b) * u + rate + 0.43);
    if (margin >= 0.07 && v <= sure) return n;
    if (n < 0 || (margin < 0.013 && v > margin)) continue;
    if (Math.log((v * inverseAlpha) / (a / (margin * margin) + b)) <= logPoissonDensity(n, rate)) return n;
  }
}

function searchPoisson(stream: RandomStream, rate: number): number {
  let u = stream.nextUniform();
  let probability = Math.exp(-rate);
  let n = 0;
  while (u >= probability && probability > 0) {
    u -= probability;
    n += 1;
    probability *= rate / n;
  }
  return n;
}

/** Returns a draw of Binomial(trials, p), trials whole: search, from a mean of 10 on Hörmann's BTRS (1993). */
export function drawBinomial(stream: RandomStream, trials: number, p: number): number {
  requireThat(Number.isInteger(trials) && trials >= 0, `Binomial trials ${trials}`);
  requireThat(p >= 0 && p <= 1, `Binomial probability ${p}`);
  if (p > 0.5) return trials - drawBinomial(stream, trials, 1 - p);
  return trials * p < SEARCH_BELOW ? searchBinomial(stream, trials, p) : rejectBinomial(stream, trials, p);
}

function searchBinomial(stream: RandomStream, trials: number, p: number): number {
  const odds = p / (1 - p);
  let u = stream.nextUniform();
  let probability = Math.exp(trials * Math.log1p(-p));
  let n = 0;
  while (u >= probability && n < trials) {
    u -= probability;
    n += 1;
    probability *= (odds * (trials - n + 1)) / n;
  }
  return n;
}

function rejectBinomial(stream: RandomStream, trials: number, p: number): number {
  const spread = Math.sqrt(trials * p * (1 - p));
  const b = 1.15 + 2.53 * spread;
  const a = -0.0873 + 0.0248 * b + 0.01 * p;
  const centre = trials * p + 0.5;
  const sure = 0.92 - 4.2 / b;
  const alpha = (2.83 + 5.1 / b) * spread;
  const logOdds = Math.log(p / (1 - p));
  const mode = Math.floor((trials + 1) * p);
  const logMode = logGamma(mode + 1) + logGamma(trials - mode + 1);
  for (;;) {
    const u = stream.nextUniform() - 0.5;
    const v = drawOpenUniform(stream);
    const margin = 0.5 - Math.abs(u);
    const n = Math.floor(((2 * a) / margin + b) * u + centre);
    if (n < 0 || n > trials) continue;
    if (margin >= 0.07 && v <= sure) return n;
    const logRatio = logMode - logGamma(n + 1) - logGamma(trials - n + 1) + (n - mode) * logOdds;
    if (Math.log((v * alpha) / (a / (margin * margin) + b)) <= logRatio) return n;
  }
}

function requireThat(holds: boolean, what: string): void {
  if (!holds) throw new RangeError(`${what} is outside the domain`);
}
