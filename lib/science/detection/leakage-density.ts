import { poissonDensity } from "@/lib/science/stats/gamma-functions";
import { poissonCdf, poissonSurvival } from "@/lib/science/stats/special-functions";

/** Means of the counts of a shot that stays dark or bright, and the chances to change state per count of signal. */
export interface LeakageLaw {
  dark: number;
  bright: number;
  /** a = R τ/(λ_b − λ_d): leaves the dark state at rate R in a window τ. */
  leakDark: number;
  leakBright: number;
}

/**
 * Returns P(n) of a shot prepared dark that may turn bright once within the window: e^{−aΔ} Poisson(n; λ_d) plus the average over the
 * moment of change, with Δ = λ_b − λ_d (Acton et al. 2006, with background).
 */
export function darkLeakageDensity(n: number, { dark, bright, leakDark: leak }: LeakageLaw): number {
  const stays = Math.exp(-leak * (bright - dark)) * poissonDensity(n, dark);
  const changes = leak * Math.exp(-leak * bright - (n + 1) * Math.log1p(-leak)) * between(n, (1 - leak) * dark, (1 - leak) * bright);
  return stays + changes;
}

/** Returns P(n) of a shot prepared bright that may turn dark once within the window. */
export function brightLeakageDensity(n: number, { dark, bright, leakBright: leak }: LeakageLaw): number {
  const stays = Math.exp(-leak * (bright - dark)) * poissonDensity(n, bright);
  const changes = leak * Math.exp(leak * dark - (n + 1) * Math.log1p(leak)) * between(n, (1 + leak) * dark, (1 + leak) * bright);
  return stays + changes;
}

/** P(n + 1, high) − P(n + 1, low) of the regularised incomplete gamma function, from whichever side is small. */
function between(n: number, low: number, high: number): number {
  return n < low ? poissonCdf(n, low) - poissonCdf(n, high) : poissonSurvival(n, high) - poissonSurvival(n, low);
}
