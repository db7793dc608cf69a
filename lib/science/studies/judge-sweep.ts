import { decimalsFor, fixed, shortForm } from "@/lib/science/front/short-form";
import { quantile } from "@/lib/science/stats/quantiles";
import { CHOICE_NAMES, differingChoices, type ChoiceName } from "@/lib/science/studies/sweep-choices";
import { choiceLabel, combinationLabel } from "@/lib/science/studies/sweep-labels";
import type { SweepCombination, SweepResult, SweptChoice, SweptNumber } from "@/lib/science/studies/sweep-result";

const TWO_SIDED_95 = 1.959963984540054;

/** Returns what the combinations, the analysis' own first, say together; `saved` is γ of the analysis with its bootstrap error. */
export function judgeSweep(combinations: readonly SweepCombination[], saved: SweptNumber | null): SweepResult {
  const [baseline] = combinations;
  const beyond = (side: 1 | -1) => combinations.filter(({ gamma }) => gamma !== null && side * (gamma.value - 1) > TWO_SIDED_95 * gamma.error).length;
  const choices = CHOICE_NAMES.map((name) => choiceOf(name, combinations, saved))
    .filter(({ alternatives }) => alternatives > 0)
    .sort((one, other) => (other.shift ?? -1) - (one.shift ?? -1));
  const betas = betasOf(combinations);
  const result = {
    baseline,
    saved,
    combinations: Array.from(combinations),
    choices,
    withoutFit: combinations.length - betas.length,
    middle: betas.length === 0 ? null : { low: quantile(betas, 0.025), high: quantile(betas, 0.975) },
    fasterThanLinear: beyond(-1),
    slowerThanLinear: beyond(1),
  };
  return { ...result, sentence: sentenceOf(result, betas), notes: notesOf(result) };
}

function betasOf(combinations: readonly SweepCombination[]): number[] {
  return combinations.flatMap(({ beta }) => (beta === null ? [] : [beta.value]));
}

function choiceOf(name: ChoiceName, combinations: readonly SweepCombination[], saved: SweptNumber | null): SweptChoice {
  const [baseline] = combinations;
  const alone = combinations.filter(({ choices }) => {
    const differing = differingChoices(choices, baseline.choices);
    return differing.length === 1 && differing[0] === name;
  });
  const betas = betasOf([baseline, ...alone]);
  const from = baseline.gamma;
  const moves = from === null || saved === null ? [] : alone.flatMap(({ gamma }) => (gamma === null ? [] : [Math.abs(gamma.value - from.value) / saved.error]));
  return {
    name,
    alternatives: alone.length,
    withoutFit: alone.length + 1 - betas.length,
    leastBeta: betas.length === 0 ? null : Math.min(...betas),
    mostBeta: betas.length === 0 ? null : Math.max(...betas),
    shift: moves.length === 0 ? null : Math.max(...moves),
  };
}

type Judged = Omit<SweepResult, "sentence" | "notes">;

function sentenceOf({ baseline, saved, choices, middle, fasterThanLinear, slowerThanLinear }: Judged, betas: number[]): string {
  if (baseline.beta === null || middle === null) return `The analysis' own choices allow no power law without a bootstrap: ${baseline.reason ?? "γ is zero."}`;
  const span = (low: number, high: number) => `between ${fixed(low, 2)} and ${fixed(high, 2)}`;
  const [side, agreeing] = baseline.beta.value < 1 ? ["slower", slowerThanLinear] : ["faster", fasterThanLinear];
  const sentences = [
    `${openingOf(baseline.beta, saved)}; over ${betas.length} combinations of choices it lies ${span(Math.min(...betas), Math.max(...betas))}, in 19 of 20 of them ${span(middle.low, middle.high)}.`,
    `${agreeing} of them are ${side} than linear by 1.96 of their errors.`,
  ];
  const [first] = choices;
  if (first !== undefined && first.shift !== null) {
    sentences.push(`Most hangs on the ${choiceLabel(first.name)}, which alone moves γ by up to ${fixed(first.shift, 1)} of its error.`);
  }
  return sentences.join(" ");
}

/** The same choices weigh their points a little differently without a bootstrap. */
function openingOf(own: SweptNumber, saved: SweptNumber | null): string {
  if (saved === null || saved.value === 0) return `With the choices as saved β = ${shortForm(own.value, own.error)} without a bootstrap`;
  const error = saved.error / saved.value ** 2;
  return `The analysis has β = ${shortForm(1 / saved.value, error)}, its choices without a bootstrap ${fixed(own.value, Math.max(1, decimalsFor(error)))}`;
}

function notesOf({ combinations, withoutFit, baseline, saved }: Judged): string[] {
  const notes = [
    "Every combination has its error by the same closed form, the delta method from the shots through crossings and fit; it takes points as independent and the pooling of samples as fixed.",
    "All combinations read the same shots: their scatter is no error bar, and none of them is better for agreeing with another.",
  ];
  if (baseline.gamma !== null && saved !== null) notes.push(comparisonNote(baseline.gamma, saved));
  const failed = combinations.find(({ gamma }) => gamma === null);
  if (failed !== undefined) notes.push(`${withoutFit} of ${combinations.length} combinations allow no fit, among them “${combinationLabel(failed.choices, baseline.choices)}”. ${failed.reason ?? ""}`);
  return notes;
}

function comparisonNote(own: SweptNumber, saved: SweptNumber): string {
  return `With these errors as weights the analysis' own choices give γ = ${shortForm(own.value, own.error)}, with the bootstrap's ${shortForm(saved.value, saved.error)}: what a choice moves is counted from the first in errors of the second.`;
}
