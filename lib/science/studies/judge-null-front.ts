import { fixed } from "@/lib/science/front/short-form";
import type { NullFrontPlan } from "@/lib/science/studies/null-front";
import type { NullFrontRepeat, NullFrontResult } from "@/lib/science/studies/null-front-result";
import { numbersAmong, spreadOf } from "@/lib/science/studies/spread-of-repeats";

/** One-sided level at which a front counts as faster than the nearest-neighbour cone. */
const LEVEL = 0.025;
/** With fewer fitted repeats than this p cannot reach the level. */
const LEAST_FITTED = Math.ceil(1 / LEVEL) - 1;
const MANY_WITHOUT_FIT = 0.05;
const MODELS = {
  xy: "the nearest-neighbour XY chain from the Néel state",
  ising: "the nearest-neighbour Ising chain in a transverse field h = J from all spins up",
};

/**
 * Returns the comparison of an observed γ with those of the repeats: p = (1 + #{γ_null ≤ γ_observed})/(R + 1) over the R
 * repeats with a fit (Davison and Hinkley 1997, section 4.2), quantiles, one sentence, and warnings.
 */
export function judgeNullFront(plan: NullFrontPlan, repeats: readonly NullFrontRepeat[], observedGamma: number | null): NullFrontResult {
  const gammas = repeats.map(({ gamma }) => gamma);
  const numbers = numbersAmong(gammas);
  const asSmall = observedGamma === null ? 0 : numbers.filter((gamma) => gamma <= observedGamma).length;
  const pValue = observedGamma === null || numbers.length === 0 ? null : (1 + asSmall) / (numbers.length + 1);
  const share = (count: number) => (repeats.length === 0 ? null : count / repeats.length);
  const result = {
    model: plan.model,
    coupling: plan.coupling,
    repeats: repeats.length,
    fitted: numbers.length,
    shareWithoutFit: share(repeats.length - numbers.length),
    observed: { gamma: observedGamma, beta: observedGamma === null || observedGamma === 0 ? null : 1 / observedGamma },
    noiseFree: plan.noiseFree,
    gamma: spreadOf(gammas),
    beta: spreadOf(repeats.map(({ beta }) => beta)),
    v_sites_per_ms: spreadOf(repeats.map(({ v_sites_per_ms }) => v_sites_per_ms)),
    gammas,
    fasterThanLinearShare: share(repeats.filter(({ verdict }) => verdict === "faster than linear").length),
    pValue,
    fasterThanNearestNeighbour: pValue !== null && pValue <= LEVEL,
  };
  return { ...result, sentence: sentenceOf(result, asSmall), warnings: warningsOf(plan, repeats, result) };
}

type Judged = Omit<NullFrontResult, "sentence" | "warnings">;

function sentenceOf({ model, pValue, observed, fitted, fasterThanNearestNeighbour }: Judged, asSmall: number): string {
  if (observed.gamma === null) return "No comparison with a nearest-neighbour cone: the analysis has no power-law fit.";
  if (pValue === null) return `No comparison with a nearest-neighbour cone: no simulated run of ${MODELS[model]} allowed a fit.`;
  const evidence = `γ = ${fixed(observed.gamma, 2)}, and ${asSmall} of ${fitted} simulated runs of ${MODELS[model]} gave a γ as small (p = ${formatP(pValue)})`;
  return fasterThanNearestNeighbour
    ? `Faster than a nearest-neighbour cone: ${evidence}.`
    : `Not shown to be faster than a nearest-neighbour cone: ${evidence}.`;
}

function formatP(p: number): string {
  return p < 0.1 ? fixed(p, 3) : fixed(p, 2);
}

function warningsOf(plan: NullFrontPlan, repeats: readonly NullFrontRepeat[], { fitted, shareWithoutFit, coupling }: Judged): string[] {
  const warnings: string[] = [];
  if (fitted < LEAST_FITTED) {
    warnings.push(`With ${fitted} simulated runs that carry a fit, p cannot come below ${fixed(1 / (fitted + 1), 3)}; ${LEAST_FITTED} are needed for a verdict.`);
  }
  if (shareWithoutFit !== null && shareWithoutFit > MANY_WITHOUT_FIT) {
    warnings.push(`${percent(shareWithoutFit)} of the simulated runs allowed no fit and are left out of the comparison.`);
  }
  if (coupling.source === "matched") {
    warnings.push(
      `The run's coupling is not known: J/2π = ${coupling.j_hz.toPrecision(3)} Hz makes the model cross at the observed time at distance ${coupling.matchedDistance}. Only the front's shape is compared, not its speed.`,
    );
  }
  const points = spreadOf(repeats.map(({ points: count }) => count)).median;
  if (points !== null && points < plan.observedPoints) {
    warnings.push(`The analysis fits ${plan.observedPoints} points, a simulated run mostly ${points}: the model's signal is too weak at the other distances.`);
  }
  return warnings;
}

function percent(share: number): string {
  return `${fixed(100 * share, 0)}\u202f%`;
}
