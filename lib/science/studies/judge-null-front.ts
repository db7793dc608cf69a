import { fixed } from "@/lib/science/front/short-form";
import type { NullFrontPlan } from "@/lib/science/studies/null-front";
import type { NullFrontRepeat, NullFrontResult } from "@/lib/science/studies/null-front-result";
import { numbersAmong, spreadOf } from "@/lib/science/studies/spread-of-repeats";

/** One-sided level at which a front counts as faster than the nearest-neighbour cone. */
const LEVEL = 0.025;
/** With fewer repeats in the comparison than this p cannot reach the level. */
const LEAST_COMPARED = Math.ceil(1 / LEVEL) - 1;
/** Share of repeats with a fit below which the reach is compared instead of γ. */
const ENOUGH_FITTED = 0.5;
const MANY_WITHOUT_FIT = 0.05;
const MODELS = {
  xy: "the nearest-neighbour XY chain from the Néel state",
  ising: "the nearest-neighbour Ising chain in a transverse field h = J from all spins up",
};

/**
 * Returns the comparison of an observed front with the repeats: p = (1 + #{as extreme})/(R + 1) (Davison and Hinkley
 * 1997, section 4.2), quantiles, one sentence, and warnings. γ is compared over the repeats with a fit; where fewer than half have
 * one, how far the front is seen. That choice looks at the repeats only.
 */
export function judgeNullFront(plan: NullFrontPlan, repeats: readonly NullFrontRepeat[], observedGamma: number | null): NullFrontResult {
  const gammas = repeats.map(({ gamma }) => gamma);
  const fitted = numbersAmong(gammas).length;
  const share = (count: number) => (repeats.length === 0 ? null : count / repeats.length);
  const statistic = fitted >= ENOUGH_FITTED * repeats.length ? ("exponent" as const) : ("reach" as const);
  const compared = compare(statistic, plan, repeats, observedGamma);
  const result = {
    model: plan.model,
    coupling: plan.coupling,
    repeats: repeats.length,
    fitted,
    shareWithoutFit: share(repeats.length - fitted),
    observed: { gamma: observedGamma, beta: observedGamma === null || observedGamma === 0 ? null : 1 / observedGamma, reach: plan.observedReach },
    noiseFree: plan.noiseFree,
    gamma: spreadOf(gammas),
    beta: spreadOf(repeats.map(({ beta }) => beta)),
    v_sites_per_ms: spreadOf(repeats.map(({ v_sites_per_ms }) => v_sites_per_ms)),
    gammas,
    fasterThanLinearShare: share(repeats.filter(({ verdict }) => verdict === "faster than linear").length),
    reach: spreadOf(repeats.map(({ reach }) => reach)),
    statistic,
    pValue: compared.pValue,
    fasterThanNearestNeighbour: compared.pValue !== null && compared.pValue <= LEVEL,
  };
  return { ...result, sentence: sentenceOf(result, compared), warnings: warningsOf(plan, repeats, result, compared) };
}

type Judged = Omit<NullFrontResult, "sentence" | "warnings">;

interface Comparison {
  /** Repeats at least as extreme as what was observed, of `of`. */
  asExtreme: number;
  of: number;
  pValue: number | null;
}

function compare(statistic: "exponent" | "reach", plan: NullFrontPlan, repeats: readonly NullFrontRepeat[], observedGamma: number | null): Comparison {
  if (observedGamma === null || repeats.length === 0) return { asExtreme: 0, of: repeats.length, pValue: null };
  const extremes =
    statistic === "exponent"
      ? Array.from(numbersAmong(repeats.map(({ gamma }) => gamma)), (gamma) => gamma <= observedGamma)
      : repeats.map(({ reach }) => reach >= plan.observedReach);
  const asExtreme = extremes.filter((isExtreme) => isExtreme).length;
  return { asExtreme, of: extremes.length, pValue: (1 + asExtreme) / (extremes.length + 1) };
}

function sentenceOf({ model, pValue, observed, statistic, fasterThanNearestNeighbour }: Judged, { asExtreme, of }: Comparison): string {
  if (observed.gamma === null) return "No comparison with a nearest-neighbour cone: the analysis has no power-law fit.";
  if (pValue === null) return "No comparison with a nearest-neighbour cone: no run was simulated.";
  const runs = `${asExtreme} of ${of} simulated runs of ${MODELS[model]}`;
  const evidence =
    statistic === "exponent"
      ? `γ = ${fixed(observed.gamma, 2)}, and ${runs} gave a γ as small (p = ${formatP(pValue)})`
      : `the front is seen out to distance ${Number(observed.reach.toFixed(2))}, and within the same times ${runs} showed one that far (p = ${formatP(pValue)})`;
  return fasterThanNearestNeighbour
    ? `Faster than a nearest-neighbour cone: ${evidence}.`
    : `Not shown to be faster than a nearest-neighbour cone: ${evidence}.`;
}

function formatP(p: number): string {
  return p < 0.1 ? fixed(p, 3) : fixed(p, 2);
}

function warningsOf(plan: NullFrontPlan, repeats: readonly NullFrontRepeat[], { shareWithoutFit, coupling, statistic, reach }: Judged, { of }: Comparison): string[] {
  const warnings: string[] = [];
  if (of < LEAST_COMPARED) {
    warnings.push(`With ${of} simulated runs in the comparison, p cannot come below ${fixed(1 / (of + 1), 3)}; ${LEAST_COMPARED} are needed for a verdict.`);
  }
  if (statistic === "reach") {
    warnings.push(
      `Most simulated runs allow no fit: within the run's times the model is mostly seen out to distance ${Number((reach.median ?? 0).toFixed(2))} only. So how far the front is seen is compared, not γ; that depends on the strength of the signal too.`,
    );
  } else if (shareWithoutFit !== null && shareWithoutFit > MANY_WITHOUT_FIT) {
    warnings.push(`${fixed(100 * shareWithoutFit, 0)}\u202f% of the simulated runs allowed no fit and are left out of the comparison.`);
  }
  if (coupling.source === "matched") {
    warnings.push(
      `The run's coupling is not known: J/2π = ${formatCoupling(coupling.j_hz)} Hz makes the model cross at the observed time at distance ${coupling.matchedDistance}. Only the front's shape is compared, not its speed.`,
    );
  }
  const points = spreadOf(repeats.map(({ points: count }) => count)).median;
  if (statistic === "exponent" && points !== null && points < plan.observedPoints) {
    warnings.push(`The analysis fits ${plan.observedPoints} points, a simulated run mostly ${points}: the model's signal is too weak at the other distances.`);
  }
  return warnings;
}

/** Three digits, without an exponent. */
function formatCoupling(j_hz: number): string {
  return String(Number(j_hz.toPrecision(3)));
}
