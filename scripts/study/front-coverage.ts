/** Coverage of crossing times, γ and v, and false verdicts, by crossing method. */
import { analyseTime } from "@/lib/science/correlators/analyse-time";
import { collectTraces } from "@/lib/science/correlators/collect-traces";
import { analyseFront } from "@/lib/science/front/analyse-front";
import { isNoFit, type FrontResult, type Parameter } from "@/lib/science/front/front-result";
import { DEFAULT_FRONT_FIT_OPTIONS, DEFAULT_FRONT_RULE, type CrossingMethod, type FrontRule } from "@/lib/science/front/front-rule";
import type { TraceSet } from "@/lib/science/front/trace-set";
import { createRandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { readNoiseFree } from "@/lib/science/studies/simulated-run";
import { drawShots } from "@/lib/science/theory/draw-shots";
import { addRepeat, emptyTally, mergeTallies, type CoverageTally, type Estimate } from "@/scripts/study/coverage-tally";
import { prepareCell, type FrontCell, type PreparedCell } from "@/scripts/study/front-cells";

export const METHODS = ["isotonic", "first", "last-upcrossing"] as const satisfies readonly CrossingMethod[];

/** What one method made of a row's repeats. */
export interface MethodTally {
  /** Of the noise-free traces; null without a fit. The same for every task of a row. */
  trueGamma: number | null;
  trueVelocity: number | null;
  repeats: number;
  crossings: CoverageTally;
  gamma: IntervalTallies;
  velocity: IntervalTallies;
  fasterThanLinear: number;
  /** Repeats in which γ̂ + 1.96 standard errors is below 1. */
  fasterByNormal: number;
  slowerThanLinear: number;
  noFit: number;
}

/** Three ways to make an interval of the same replicates: q; 2θ̂ − q; θ̂ ± 1.96 standard errors. */
export interface IntervalTallies {
  percentile: CoverageTally;
  basic: CoverageTally;
  normal: CoverageTally;
}

export type FrontTally = Record<(typeof METHODS)[number], MethodTally>;

/** Bootstrap replicates of a repeat. */
const REPLICATES = 200;
const Z_95 = 1.959963984540054;

function ruleOf(method: CrossingMethod): FrontRule {
  return { ...DEFAULT_FRONT_RULE, method };
}

/** Returns the tally of repeats `first` … `first + count − 1` of a row, the same whichever thread runs them. */
export function frontCoverage(cell: FrontCell, seed: number, first: number, count: number): FrontTally {
  const prepared = prepareCell(cell);
  const truths = METHODS.map((method) => trueFront(cell, prepared, seed, ruleOf(method)));
  const tallies = truths.map(emptyMethodTally);
  for (let repeat = first; repeat < first + count; repeat++) {
    const traces = simulate(cell, prepared, seed, repeat);
    METHODS.forEach((method, m) => addFront(tallies[m], truths[m], analyseFront(traces, ruleOf(method)).front));
  }
  const [isotonic, onFirst, last] = tallies;
  return { isotonic, first: onFirst, "last-upcrossing": last };
}

/** What the extractor reads from the traces of infinitely many shots. */
function trueFront(cell: FrontCell, { times_us, laws, correlators, plan }: PreparedCell, seed: number, rule: FrontRule): FrontResult {
  const run = {
    ...{ times_us, laws, traces: plan, rule, seed, replicates: REPLICATES, options: DEFAULT_FRONT_FIT_OPTIONS },
    shotsPerTime: new Float64Array(times_us.length).fill(cell.shots),
    purpose: RANDOM_PURPOSES.coverageStudy,
    ...{ readoutErrors: null, readoutCorrected: false, brightIs: "up", estimator: "plug-in", interval: "percentile" } as const,
  };
  return readNoiseFree(run, correlators).front;
}

/** The traces of one repeat by the product's own bootstrap. */
function simulate(cell: FrontCell, { times_us, laws, plan }: PreparedCell, seed: number, repeat: number): TraceSet {
  const results = laws.map((law, k) => {
    const stream = createRandomStream(seed, RANDOM_PURPOSES.coverageStudy, k, repeat);
    return analyseTime({
      timeIndex: k,
      spins: drawShots(law, cell.shots, stream),
      replicates: REPLICATES,
      seed: stream.nextUint32(),
      plan,
      blockLength: 1,
      ...{ estimator: "plug-in", readout: null, interval: "percentile", pairErrors: "law" } as const,
    });
  });
  return collectTraces(plan, times_us, results, REPLICATES);
}

function emptyMethodTally(truth: FrontResult): MethodTally {
  return {
    trueGamma: isNoFit(truth.powerLaw) ? null : truth.powerLaw.gamma.value,
    trueVelocity: isNoFit(truth.linear) ? null : truth.linear.v_sites_per_ms.value,
    repeats: 0,
    crossings: emptyTally(),
    gamma: emptyIntervals(),
    velocity: emptyIntervals(),
    fasterThanLinear: 0,
    fasterByNormal: 0,
    slowerThanLinear: 0,
    noFit: 0,
  };
}

function addFront(tally: MethodTally, truth: FrontResult, front: FrontResult): void {
  tally.repeats += 1;
  const crossings = front.points.flatMap((point, j) => (point.fitted ? held({ ...point, value: point.time_us, error: point.error_us, low: point.low_us, high: point.high_us }, truth.points[j].time_us) : []));
  addRepeat(tally.crossings, crossings);
  if (!isNoFit(front.powerLaw)) {
    const { gamma } = front.powerLaw;
    addIntervals(tally.gamma, held(gamma, tally.trueGamma));
    if (gamma.value !== null && gamma.error !== null && gamma.value + Z_95 * gamma.error < 1) tally.fasterByNormal += 1;
  }
  if (!isNoFit(front.linear)) addIntervals(tally.velocity, held(front.linear.v_sites_per_ms, tally.trueVelocity));
  if (front.verdict === "faster than linear") tally.fasterThanLinear += 1;
  if (front.verdict === "slower than linear") tally.slowerThanLinear += 1;
  if (front.verdict === "no fit") tally.noFit += 1;
}

/** An interval with its truth, when both exist; an end that is missing is infinite. */
function held({ value, error, low, high }: Pick<Parameter, "value" | "error" | "low" | "high">, truth: number | null): { estimate: Estimate; truth: number }[] {
  if (value === null || truth === null) return [];
  return [{ estimate: { value, error: error ?? Number.NaN, low: low ?? -Infinity, high: high ?? Infinity }, truth }];
}

function emptyIntervals(): IntervalTallies {
  return { percentile: emptyTally(), basic: emptyTally(), normal: emptyTally() };
}

function addIntervals(tallies: IntervalTallies, found: { estimate: Estimate; truth: number }[]): void {
  const change = (to: (estimate: Estimate) => Pick<Estimate, "low" | "high">) => found.map(({ estimate, truth }) => ({ estimate: { ...estimate, ...to(estimate) }, truth }));
  addRepeat(tallies.percentile, found);
  addRepeat(tallies.basic, change(({ value, low, high }) => ({ low: 2 * value - high, high: 2 * value - low })));
  addRepeat(tallies.normal, change(({ value, error }) => ({ low: value - Z_95 * error, high: value + Z_95 * error })));
}

/** Returns the sum of two tallies of one row. */
export function mergeFrontTallies(first: FrontTally, second: FrontTally): FrontTally {
  const of = (method: (typeof METHODS)[number]) => mergeMethods(first[method], second[method]);
  return { isotonic: of("isotonic"), first: of("first"), "last-upcrossing": of("last-upcrossing") };
}

function mergeMethods(first: MethodTally, second: MethodTally): MethodTally {
  return {
    trueGamma: first.trueGamma,
    trueVelocity: first.trueVelocity,
    repeats: first.repeats + second.repeats,
    crossings: mergeTallies(first.crossings, second.crossings),
    gamma: mergeIntervals(first.gamma, second.gamma),
    velocity: mergeIntervals(first.velocity, second.velocity),
    fasterThanLinear: first.fasterThanLinear + second.fasterThanLinear,
    fasterByNormal: first.fasterByNormal + second.fasterByNormal,
    slowerThanLinear: first.slowerThanLinear + second.slowerThanLinear,
    noFit: first.noFit + second.noFit,
  };
}

function mergeIntervals(first: IntervalTallies, second: IntervalTallies): IntervalTallies {
  return {
    percentile: mergeTallies(first.percentile, second.percentile),
    basic: mergeTallies(first.basic, second.basic),
    normal: mergeTallies(first.normal, second.normal),
  };
}
