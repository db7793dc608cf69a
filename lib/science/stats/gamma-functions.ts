/** The gamma function's logarithm, and densities built so that large arguments lose no digits (Loader 2000). */

const HALF_LOG_TWO_PI = 0.5 * Math.log(2 * Math.PI);
const SERIES_FROM = 16;

/**
 * Returns ln Γ(n + 1) − [(n + ½) ln n − n + ½ ln 2π] for real n > 0: the error of Stirling's formula, absolute
 * accuracy 1e-15. Series from n = 16 on, reached from below by δ(n) = δ(n + 1) + (n + ½) ln(1 + 1/n) − 1.
 */
export function stirlingError(n: number): number {
  let shifted = n;
  let sum = 0;
  while (shifted < SERIES_FROM) {
    sum += (shifted + 0.5) * Math.log1p(1 / shifted) - 1;
    shifted += 1;
  }
  const s = 1 / (shifted * shifted);
  const series =
    1 / 12 - s * (1 / 360 - s * (1 / 1260 - s * (1 / 1680 - s * (1 / 1188 - s * (691 / 360360 - s / 156)))));
  return sum + series / shifted;
}

/** Returns ln Γ(x) for x > 0, +∞ at 0. */
export function logGamma(x: number): number {
  if (x === 0) return Number.POSITIVE_INFINITY;
  if (x === 1 || x === 2) return 0;
  return (x - 0.5) * Math.log(x) - x + HALF_LOG_TWO_PI + stirlingError(x);
}

/** Returns x ln(x/m) + m − x for x, m > 0 without cancellation near x = m (Loader's deviance). */
function deviance(x: number, m: number): number {
  const difference = x - m;
  if (Math.abs(difference) > 0.1 * (x + m)) return x * Math.log(x / m) - difference;
  const v = difference / (x + m);
  let sum = difference * v;
  let power = 2 * x * v;
  for (let odd = 3; ; odd += 2) {
    power *= v * v;
    const next = sum + power / odd;
    if (next === sum) return sum;
    sum = next;
  }
}

/** Returns `λ^n e^(−λ) / Γ(n + 1)` for real n ≥ 0 and λ ≥ 0: the Poisson probability at whole n. */
export function poissonDensity(n: number, rate: number): number {
  if (rate === 0) return n === 0 ? 1 : 0;
  if (n === 0) return Math.exp(-rate);
  return Math.exp(-stirlingError(n) - deviance(n, rate)) / Math.sqrt(2 * Math.PI * n);
}

/** Returns ln of `poissonDensity`. */
export function logPoissonDensity(n: number, rate: number): number {
  if (rate === 0) return n === 0 ? 0 : Number.NEGATIVE_INFINITY;
  if (n === 0) return -rate;
  return -stirlingError(n) - deviance(n, rate) - 0.5 * Math.log(2 * Math.PI * n);
}

/** Returns `Γ(a + b + 1) / (Γ(a + 1) Γ(b + 1)) · x^a (1 − x)^b` for a, b > 0 and x in (0, 1). */
export function binomialDensity(a: number, b: number, x: number): number {
  const n = a + b;
  const corrections = stirlingError(n) - stirlingError(a) - stirlingError(b);
  const exponent = corrections - deviance(a, n * x) - deviance(b, n * (1 - x));
  return Math.exp(exponent) * Math.sqrt(n / (2 * Math.PI * a * b));
}
