import { differingChoices, type ChoiceName, type SweepChoices } from "@/lib/science/studies/sweep-choices";

const NAMES: Record<ChoiceName, string> = {
  threshold: "threshold",
  level: "level",
  traces: "traces",
  crossing: "crossing method",
  correction: "readout correction",
  "first-times": "first times",
  "last-times": "last times",
};

/** Returns what a choice is called. */
export function choiceLabel(name: ChoiceName): string {
  return NAMES[name];
}

/** Returns what a combination chooses under a name, in a few words. */
export function optionLabel(name: ChoiceName, choices: SweepChoices): string {
  switch (name) {
    case "threshold":
      return choices.thresholdShift === 0 ? "θ as saved" : `θ ${choices.thresholdShift > 0 ? "+" : "\u2212"} ${Math.abs(choices.thresholdShift)}`;
    case "level":
      return `level ${Number(choices.level.toPrecision(4))}`;
    case "traces":
      return choices.traces.kind === "distance" ? "by distance" : `reference site ${choices.traces.site}`;
    case "crossing":
      return choices.method === "first" ? `first, hold ${choices.hold}` : choices.method.replace("-", " ");
    case "correction":
      return choices.readoutCorrection ? "corrected" : "not corrected";
    case "first-times":
      return leftOut("first", choices.firstLeftOut);
    case "last-times":
      return leftOut("last", choices.lastLeftOut);
  }
}

/** Returns in what a combination differs from the saved one. */
export function combinationLabel(choices: SweepChoices, saved: SweepChoices): string {
  const names = differingChoices(choices, saved);
  return names.length === 0 ? "as saved" : names.map((name) => optionLabel(name, choices)).join(", ");
}

function leftOut(which: string, count: number): string {
  if (count === 0) return "all times";
  return count === 1 ? `without the ${which} time` : `without the ${which} ${count} times`;
}
