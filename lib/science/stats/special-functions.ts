/**
 * Distribution functions in full double precision, from series and continued fractions (Abramowitz and Stegun 6.5, 26.5; Lentz's
 * evaluation as modified by Thompson and Barnett 1986). Arguments outside the domain give NaN.
 */
import { binomialDensity, logGamma, poissonDensity } from "@/lib/science/stats/gamma-functions";
import { normalQuantile } from "@/lib/science/stats/normal-quantile";

export { logGamma, normalQuantile };

const TINY = 1e-300;
const ROUNDING = 1e-16;
const MOST_TERMS = 1_000_000;

/** Returns P(a, x), the regularised lower incomplete gamma function, a > 0, x ≥ 0. */
export function regularisedGammaP(a: number, x: number): number {
  if (!(a > 0) || !(x >= 0)) return Number.NaN;
  if (x === 0) return 0;
  if (x === Number.POSITIVE_INFINITY) return 1;
  return x < a + 1 ? gammaSeries(a, x) : 1 - gammaContinuedFraction(a, x);
}

/** Returns Q(a, x) = 1 − P(a, x), accurate also where it is tiny. */
export function regularisedGammaQ(a: number, x: number): number {
  if (!(a > 0) || !(x >= 0)) return Number.NaN;
  if (x === 0) return 1;
  if (x === Number.POSITIVE_INFINITY) return 0;
  return x < a + 1 ? 1 - gammaSeries(a, x) : gammaContinuedFraction(a, x);
}

function gammaSeries(a: number, x: number): number {
  let term = 1;
  let sum = 1;
  for (let n = 1; n < MOST_TERMS && term > sum * ROUNDING; n++) {
    term *= x / (a + n);
    sum += term;
  }
  return Math.min(1, poissonDensity(a, x) * sum);
}

function gammaContinuedFraction(a: number, x: number): number {
  let b = x + 1 - a;
  let c = 1 / TINY;
  let d = 1 / b;
  let h = d;
  for (let n = 1; n < MOST_TERMS; n++) {
    const an = -n * (n - a);
    b += 2;
    d = 1 / awayFromZero(an * d + b);
    c = awayFromZero(b + an / c);
    const factor = d * c;
    h *= factor;
    if (Math.abs(factor - 1) < ROUNDING * 2) break;
  }
  return Math.min(1, poissonDensity(a, x) * a * h);
}

function awayFromZero(value: number): number {
  return Math.abs(value) < TINY ? TINY : value;
}

/** Returns I_x(a, b), the regularised incomplete beta function, a, b > 0, x in [0, 1]. */
export function regularisedBeta(x: number, a: number, b: number): number {
  if (!(a > 0) || !(b > 0) || !(x >= 0 && x <= 1)) return Number.NaN;
  if (x === 0 || x === 1) return x;
  const front = binomialDensity(a, b, x) / (a + b);
  if (x < (a + 1) / (a + b + 2)) return front * b * betaContinuedFraction(x, a, b);
  return 1 - front * a * betaContinuedFraction(1 - x, b, a);
}

function betaContinuedFraction(x: number, a: number, b: number): number {
  let c = 1;
  let d = 1 / awayFromZero(1 - ((a + b) * x) / (a + 1));
  let h = d;
  for (let m = 1; m < MOST_TERMS; m++) {
    const even = (m * (b - m) * x) / ((a + 2 * m - 1) * (a + 2 * m));
    d = 1 / awayFromZero(1 + even * d);
    c = awayFromZero(1 + even / c);
    h *= d * c;
    const odd = (-(a + m) * (a + b + m) * x) / ((a + 2 * m) * (a + 2 * m + 1));
    d = 1 / awayFromZero(1 + odd * d);
    c = awayFromZero(1 + odd / c);
    const factor = d * c;
    h *= factor;
    if (Math.abs(factor - 1) < ROUNDING * 2) break;
  }
  return h;
}

/** Returns the x in [0, 1] with I_x(a, b) = p: the quantile of Beta(a, b). Newton steps kept inside a bisection. */
export function inverseRegularisedBeta(p: number, a: number, b: number): number {
  if (!(p >= 0 && p <= 1) || !(a > 0) || !(b > 0)) return Number.NaN;
  if (p === 0 || p === 1) return p;
  let low = 0;
  let high = 1;
  let x = a / (a + b);
  for (let step = 0; step < 200; step++) {
    const excess = regularisedBeta(x, a, b) - p;
    if (excess > 0) high = x;
    else low = x;
    const density = (binomialDensity(a, b, x) * a * b) / ((a + b) * x * (1 - x));
    const newton = x - excess / density;
    const next = newton > low && newton < high ? newton : 0.5 * (low + high);
    if (Math.abs(next - x) <= 2 * ROUNDING * x) return next;
    x = next;
  }
  return x;
}

/** Returns Φ(z), the standard normal distribution function, with full relative accuracy in the lower tail. */
export function normalCdf(z: number): number {
  const tail = 0.5 * regularisedGammaQ(0.5, 0.5 * z * z);
  return z < 0 ? tail : 1 - tail;
}

/** Returns P(X > x) for a χ² variable of `dof` degrees of freedom. */
export function chiSquareSurvival(x: number, dof: number): number {
  return regularisedGammaQ(dof / 2, x / 2);
}

/** Returns P(N ≤ n) for a Poisson variable; n is rounded down, and below 0 gives 0. */
export function poissonCdf(n: number, rate: number): number {
  const whole = Math.floor(n);
  return whole < 0 ? 0 : regularisedGammaQ(whole + 1, rate);
}

/** Returns P(N > n) for a Poisson variable, accurate also where it is tiny. */
export function poissonSurvival(n: number, rate: number): number {
  const whole = Math.floor(n);
  return whole < 0 ? 1 : regularisedGammaP(whole + 1, rate);
}
