import type { LevelRule } from "@/lib/science/front/front-rule";
import { CHOICE_NAMES, choiceKey, withChoice, type ChoiceName, type SweepChoices } from "@/lib/science/studies/sweep-choices";

/** What there is to choose from in one run. */
export interface SweepRoom {
  /** The analysis' own choices. */
  saved: SweepChoices;
  rule: LevelRule;
  sites: number;
  times: number;
  /** `[shift]`, the threshold shifts that mean something; only 0 for fractional counts. */
  thresholdShifts: readonly number[];
  /** `[shift]`, whether readout can be corrected at this shift. */
  correctable: readonly boolean[];
}

/** More combinations are not made: the last pairs of alternatives are dropped. */
const MOST_COMBINATIONS = 256;
const FRACTIONS = [0.05, 0.1, 0.15, 0.2, 0.3];
const STRETCHES = [0.5, 0.75, 1.5, 2];
const HOLDS = [1, 2, 3];
const MOST_LEFT_OUT = 2;
/** Times that must remain for a window to be worth a look. */
const LEAST_TIMES = 5;

/**
 * Returns the combinations of a sweep, the saved one first: every alternative of one choice alone; the full factorial of
 * thresholds, levels, the two kinds of traces and the readout correction, the choices that act on each other through
 * the size of the signal; and every pair of alternatives of two different choices, so that no two-way interaction hides.
 */
export function designSweep(room: SweepRoom): SweepChoices[] {
  const alternatives = alternativesOf(room);
  const design = new Map<string, SweepChoices>();
  const add = (choices: SweepChoices) => {
    const key = CHOICE_NAMES.map((name) => choiceKey(name, choices)).join();
    if (design.size < MOST_COMBINATIONS && isPossible(room, choices) && !design.has(key)) design.set(key, choices);
  };
  add(room.saved);
  for (const name of CHOICE_NAMES) for (const alternative of alternatives[name]) add(alternative);
  for (const combination of factorial(room.saved, alternatives)) add(combination);
  CHOICE_NAMES.forEach((first, at) => {
    for (const second of CHOICE_NAMES.slice(at + 1)) {
      for (const one of alternatives[first]) for (const other of alternatives[second]) add(withChoice(one, second, other));
    }
  });
  return Array.from(design.values());
}

/** `[choice]`, combinations that differ from the saved one in this choice alone. */
type Alternatives = Record<ChoiceName, SweepChoices[]>;

function alternativesOf({ saved, rule, sites, times, thresholdShifts }: SweepRoom): Alternatives {
  const others = (changes: Partial<SweepChoices>[], name: ChoiceName) =>
    changes.map((change) => ({ ...saved, ...change })).filter((choices) => choiceKey(name, choices) !== choiceKey(name, saved));
  const leftOut = Array.from({ length: Math.max(0, Math.min(MOST_LEFT_OUT, times - LEAST_TIMES)) }, (_, at) => at + 1);
  return {
    threshold: others(thresholdShifts.map((thresholdShift) => ({ thresholdShift })), "threshold"),
    level: others(levelsBeside(saved.level, rule).map((level) => ({ level })), "level"),
    traces: others([{ traces: { kind: "distance" } }, ...someSites(sites).map((site) => ({ traces: { kind: "reference" as const, site } }))], "traces"),
    crossing: others([{ method: "isotonic" }, { method: "last-upcrossing" }, ...HOLDS.map((hold) => ({ method: "first" as const, hold }))], "crossing"),
    correction: others([{ readoutCorrection: !saved.readoutCorrection }], "correction"),
    "first-times": others(leftOut.map((firstLeftOut) => ({ firstLeftOut })), "first-times"),
    "last-times": others(leftOut.map((lastLeftOut) => ({ lastLeftOut })), "last-times"),
  };
}

function levelsBeside(level: number, rule: LevelRule): number[] {
  if (rule === "fraction-of-max") return FRACTIONS;
  return STRETCHES.map((stretch) => stretch * level).filter((other) => rule === "noise-multiple" || other < 1);
}

/** Both ends, the middle, and the quarters of the array. */
function someSites(sites: number): number[] {
  const last = sites - 1;
  return [...new Set([0, last, Math.round(last / 2), Math.round(last / 4)])];
}

function factorial(saved: SweepChoices, alternatives: Alternatives): SweepChoices[] {
  const otherKind = alternatives.traces.filter(({ traces }) => traces.kind !== saved.traces.kind).slice(0, 1);
  const factors: [ChoiceName, SweepChoices[]][] = [
    ["threshold", alternatives.threshold],
    ["level", alternatives.level],
    ["traces", otherKind],
    ["correction", alternatives.correction],
  ];
  return factors.reduce((made, [name, options]) => made.flatMap((choices) => [choices, ...options.map((option) => withChoice(choices, name, option))]), [saved]);
}

function isPossible({ correctable, thresholdShifts, times }: SweepRoom, choices: SweepChoices): boolean {
  if (times - choices.firstLeftOut - choices.lastLeftOut < Math.min(times, LEAST_TIMES)) return false;
  return !choices.readoutCorrection || correctable[thresholdShifts.indexOf(choices.thresholdShift)];
}
