import { differingChoices, choiceKey, type ChoiceName } from "@/lib/science/studies/sweep-choices";
import { choiceLabel, optionLabel } from "@/lib/science/studies/sweep-labels";
import type { SweepCombination, SweepResult } from "@/lib/science/studies/sweep-result";

/** One line of the sweep's dot plot: a choice's name above its alternatives, or one alternative. */
export type SweepRow = { kind: "choice"; text: string } | SweepOptionRow;

export interface SweepOptionRow {
  kind: "option";
  text: string;
  /** This choice alone differs from the analysis; the analysis' own in the first row. */
  alone: SweepCombination;
  /** β of every combination that makes this choice, whatever else differs. */
  among: number[];
}

/** Returns the rows from the top: the analysis' own choices, then every choice with its alternatives, the weightiest first. */
export function sweepRows({ baseline, combinations, choices }: SweepResult): SweepRow[] {
  const own: SweepOptionRow = { kind: "option", text: "as saved", alone: baseline, among: betasOf(combinations) };
  return [own, ...choices.flatMap(({ name }): SweepRow[] => [{ kind: "choice", text: choiceLabel(name) }, ...optionRows(name, baseline, combinations)])];
}

function optionRows(name: ChoiceName, baseline: SweepCombination, combinations: readonly SweepCombination[]): SweepOptionRow[] {
  return combinations
    .filter(({ choices }) => differingChoices(choices, baseline.choices).join() === name)
    .map((alone) => {
      const key = choiceKey(name, alone.choices);
      return { kind: "option", text: optionLabel(name, alone.choices), alone, among: betasOf(combinations.filter(({ choices }) => choiceKey(name, choices) === key)) };
    });
}

function betasOf(combinations: readonly SweepCombination[]): number[] {
  return combinations.flatMap(({ beta }) => (beta === null ? [] : [beta.value]));
}

/** Returns the span of β to draw: all single changes with their errors and 95 % of all combinations; the rest is left outside. */
export function sweepDomain(rows: readonly SweepRow[], { middle }: Pick<SweepResult, "middle">): [number, number] {
  const ends = rows.flatMap((row) => (row.kind === "option" && row.alone.beta !== null ? [row.alone.beta.value - row.alone.beta.error, row.alone.beta.value + row.alone.beta.error] : []));
  const all = middle === null ? ends : [...ends, middle.low, middle.high];
  if (all.length === 0) return [0, 2];
  const [least, most] = [Math.min(...all), Math.max(...all)];
  const margin = Math.max(0.02, 0.05 * (most - least));
  return [least - margin, most + margin];
}
