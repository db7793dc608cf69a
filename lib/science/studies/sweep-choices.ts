import type { CrossingMethod } from "@/lib/science/front/front-rule";

/** Which traces carry the front: those of one reference site, or averages over all pairs (of a bulk) at one distance. */
export type SweptTraces = { kind: "reference"; site: number } | { kind: "distance" };

/** One combination of the choices that a sweep varies. Every other choice stays as in the saved analysis. */
export interface SweepChoices {
  /** Whole counts added to every site's threshold. */
  thresholdShift: number;
  readoutCorrection: boolean;
  traces: SweptTraces;
  /** In the sense of the analysis' level rule. */
  level: number;
  method: CrossingMethod;
  /** Used by `first` only. */
  hold: number;
  /** Evolution times left out at the beginning and at the end. */
  firstLeftOut: number;
  lastLeftOut: number;
}

export const CHOICE_NAMES = ["threshold", "level", "traces", "crossing", "correction", "first-times", "last-times"] as const;
export type ChoiceName = (typeof CHOICE_NAMES)[number];

const PARTS: Record<ChoiceName, (choices: SweepChoices) => Partial<SweepChoices>> = {
  threshold: ({ thresholdShift }) => ({ thresholdShift }),
  level: ({ level }) => ({ level }),
  traces: ({ traces }) => ({ traces }),
  crossing: ({ method, hold }) => ({ method, hold }),
  correction: ({ readoutCorrection }) => ({ readoutCorrection }),
  "first-times": ({ firstLeftOut }) => ({ firstLeftOut }),
  "last-times": ({ lastLeftOut }) => ({ lastLeftOut }),
};

/** Returns a text that is equal for two combinations exactly when they choose the same under this name. */
export function choiceKey(name: ChoiceName, choices: SweepChoices): string {
  if (name === "crossing" && choices.method !== "first") return choices.method;
  return JSON.stringify(PARTS[name](choices));
}

/** Returns the names under which two combinations differ, in the order of `CHOICE_NAMES`. */
export function differingChoices(one: SweepChoices, other: SweepChoices): ChoiceName[] {
  return CHOICE_NAMES.filter((name) => choiceKey(name, one) !== choiceKey(name, other));
}

/** Returns `into` with one choice taken over from `from`. */
export function withChoice(into: SweepChoices, name: ChoiceName, from: SweepChoices): SweepChoices {
  return { ...into, ...PARTS[name](from) };
}
