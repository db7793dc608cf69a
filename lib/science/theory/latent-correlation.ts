import { normalQuantile } from "@/lib/science/stats/normal-quantile";

/** Gauss–Legendre nodes and weights of 16 points on (−1, 1), positive half (Abramowitz and Stegun, table 25.4). */
const NODES = [0.0950125098376374, 0.2816035507792589, 0.4580167776572274, 0.6178762444026438, 0.755404408355003, 0.8656312023878318, 0.9445750230732326, 0.9894009349916499];
const WEIGHTS = [0.1894506104550685, 0.1826034150449236, 0.1691565193950025, 0.1495959888165767, 0.1246289712555339, 0.0951585116824928, 0.0622535239386479, 0.0271524594117541];

/** Latent correlations stay this far from ±1. */
const LARGEST_LATENT = 0.9999;
const CLOSE_ENOUGH = 1e-11;
const MOST_STEPS = 60;

/** Returns the threshold below which a standard normal variable lies with the chance that a spin of this mean is up. */
export function latentThreshold(mean: number): number {
  return normalQuantile(Math.min(1, Math.max(0, (1 + mean) / 2)));
}

/**
 * Returns the connected correlator of two ±1 spins that are up where normal variables of correlation ρ lie below the
 * thresholds: 4 ∫ φ₂ dρ = (2/π) ∫ exp(−(h² + k² − 2hk sin θ)/(2 cos² θ)) dθ from 0 to asin ρ (Drezner and Wesolowsky
 * 1990, Genz 2004). 0 with an infinite threshold.
 */
export function correlatorOfLatent(rho: number, h: number, k: number): number {
  return Number.isFinite(h) && Number.isFinite(k) ? integral(Math.asin(rho), h, k) : 0;
}

function integral(angle: number, h: number, k: number): number {
  let sum = 0;
  for (let m = 0; m < NODES.length; m++) {
    sum += WEIGHTS[m] * (density((angle / 2) * (1 + NODES[m]), h, k) + density((angle / 2) * (1 - NODES[m]), h, k));
  }
  return (sum * angle) / 2;
}

function density(angle: number, h: number, k: number): number {
  const cosine = Math.cos(angle);
  return (2 / Math.PI) * Math.exp(-(h * h + k * k - 2 * h * k * Math.sin(angle)) / (2 * cosine * cosine));
}

/**
 * Returns the latent correlation that gives a connected correlator, at most ±0.9999: what no ±1 variables of these
 * means can have comes out as the nearest that they can.
 */
export function latentOfCorrelator(correlator: number, h: number, k: number): number {
  if (correlator === 0 || !Number.isFinite(h) || !Number.isFinite(k)) return 0;
  const end = Math.asin(LARGEST_LATENT) * Math.sign(correlator);
  const wanted = Math.abs(correlator);
  if (Math.abs(integral(end, h, k)) <= wanted) return Math.sin(end);
  // In units of `end`: the integral grows with the angle, so Newton's steps are kept between the ends found so far.
  let [low, high] = [0, 1];
  let share = Math.min(0.9, wanted);
  for (let step = 0; step < MOST_STEPS; step++) {
    const excess = Math.abs(integral(share * end, h, k)) - wanted;
    if (Math.abs(excess) < CLOSE_ENOUGH) break;
    if (excess > 0) high = share;
    else low = share;
    const next = share - excess / (density(share * end, h, k) * Math.abs(end));
    share = next > low && next < high ? next : (low + high) / 2;
  }
  return Math.sin(share * end);
}
