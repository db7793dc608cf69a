import { sitesBeyondCorrection } from "@/lib/science/correlators/readout-correction";
import { findCrossing } from "@/lib/science/front/crossing";
import { createCrossingScratch } from "@/lib/science/front/crossing-kernel";
import { isNoFit, type FrontPoint, type FrontResult } from "@/lib/science/front/front-result";
import { mean } from "@/lib/science/stats/intervals";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { frontNumbers } from "@/lib/science/studies/front-numbers";
import type { SelfTestInput } from "@/lib/science/studies/self-test-input";
import type { IntervalEstimate, SelfTestRepeat, SelfTestTruth } from "@/lib/science/studies/self-test-result";
import { frontTime_us, wantedCorrelators, type TruthLaw } from "@/lib/science/studies/self-test-truth";
import { analyseSimulatedRun, exactTraceSet, readNoiseFree, type SimulatedRun } from "@/lib/science/studies/simulated-run";
import { refuseStudy, type StudyRefusal } from "@/lib/science/studies/study-refusal";
import { gaussianLawOf } from "@/lib/science/theory/gaussian-law";

/** What the extractor reads from the truth without noise: what every repeat's estimates are held against. */
export interface TrueFront {
  gamma: number | null;
  v_sites_per_ms: number | null;
  /** The traces that the studied analysis fitted. */
  crossings: { trace: number; label: string; distance: number; tau_us: number | null }[];
}

/** Everything the repeats of a self-test need; can be sent to a thread as it is. */
export interface SelfTestPlan {
  run: SimulatedRun;
  front: TrueFront;
  truth: SelfTestTruth;
}

/** Means stay this far from ±1, where no spin flips. */
const MEAN_MARGIN = 1e-6;
/** A correlator moved by more than this counts as changed. */
const CHANGED = 1e-3;

/**
 * Returns the plan of a self-test: a truth whose crossings lie on the fitted power law, with the run's own amplitudes,
 * rises, means, shots and readout errors, as signs of correlated normal variables. A refusal without a fitted power law, and for
 * sites beyond readout correction.
 */
export function planSelfTest(input: SelfTestInput): SelfTestPlan | StudyRefusal {
  const law = fittedLaw(input.observedFront);
  if (law === null) return refuseStudy("analysis", "A self-test needs an analysis with a fitted power law whose γ is above zero.");
  const refused = input.readoutErrors !== null && input.readoutCorrected ? sitesBeyondCorrection(input.readoutErrors) : [];
  if (refused.length > 0) return refuseStudy("readoutErrors", `Sites ${refused.join(", ")} cannot be corrected for readout.`);
  const { run, correlators, changes } = nearestRun(input, law);
  const { front } = readNoiseFree(run, correlators);
  return {
    run,
    front: trueFrontOf(front, input.observedFront.points),
    truth: { fittedGamma: law.gamma, largestChange: Math.max(0, ...changes), timesChanged: changes.filter((change) => change > CHANGED).length },
  };
}

interface Candidate {
  run: SimulatedRun;
  /** `[k][pair]`, as simulated. */
  correlators: Float64Array[];
  /** `[k]`, how far they were moved from what was asked. */
  changes: number[];
}

/** Of the two forms of signals, the one whose crossings, as simulated, keep nearer to the fitted front. */
function nearestRun(input: SelfTestInput, law: TruthLaw): Candidate {
  const wanted = wantedCorrelators(input, law);
  const swing = candidateOf(input, wanted.swing);
  const plateau = candidateOf(input, wanted.plateau);
  return misfitOf(plateau, input, law) < misfitOf(swing, input, law) ? plateau : swing;
}

function candidateOf(input: SelfTestInput, wanted: Float64Array[]): Candidate {
  const sites = input.positions.x.length;
  const surrogates = wanted.map((correlator, k) => {
    const mean = input.means.subarray(k * sites, (k + 1) * sites).map(withinMargin);
    return gaussianLawOf({ mean, correlator });
  });
  // Without correction the run's means and traces are those of the spins as read: their flips are in them already.
  const readoutErrors = input.readoutCorrected ? input.readoutErrors : null;
  return {
    run: { ...analysisOf(input), readoutErrors, laws: surrogates.map((surrogate) => surrogate.law), purpose: RANDOM_PURPOSES.selfTest },
    correlators: surrogates.map(({ correlator }) => correlator),
    changes: surrogates.map(({ largestChange }) => largestChange),
  };
}

/** Mean |ln τ/τ_front| over the traces that the studied analysis fitted; a crossing that is not there counts as 1. */
function misfitOf({ run, correlators }: Candidate, { observedFront }: SelfTestInput, law: TruthLaw): number {
  const exact = exactTraceSet(run, correlators);
  const scratch = createCrossingScratch(run.times_us.length);
  const misfits = observedFront.points.flatMap(({ fitted, distance }, trace) => {
    if (!fitted) return [];
    const miss = Math.abs(Math.log(findCrossing(exact, trace, run.rule, scratch).time_us / frontTime_us(law, distance)));
    return Number.isFinite(miss) ? miss : 1;
  });
  return misfits.length === 0 ? 0 : mean(misfits);
}

function fittedLaw({ powerLaw }: FrontResult): TruthLaw | null {
  if (isNoFit(powerLaw)) return null;
  const [a, gamma] = [powerLaw.a.value, powerLaw.gamma.value];
  return a !== null && gamma !== null && a > 0 && gamma > 0 ? { a, gamma } : null;
}

/** A mean that is not a number, as of a time without shots, is taken as zero: no shot is drawn there. */
function withinMargin(mean: number): number {
  return Number.isNaN(mean) ? 0 : Math.min(1 - MEAN_MARGIN, Math.max(MEAN_MARGIN - 1, mean));
}

function analysisOf(input: SelfTestInput) {
  const { times_us, shotsPerTime, readoutErrors, readoutCorrected, brightIs, estimator, interval, traces, rule, options, replicates, seed } = input;
  return { times_us, shotsPerTime, readoutErrors, readoutCorrected, brightIs, estimator, interval, traces, rule, options, replicates, seed };
}

function trueFrontOf(front: FrontResult, observed: readonly FrontPoint[]): TrueFront {
  const { gamma, v_sites_per_ms } = frontNumbers(front);
  const crossings = observed.flatMap(({ fitted, label, distance }, trace) => (fitted ? [{ trace, label, distance, tau_us: front.points[trace].time_us }] : []));
  return { gamma, v_sites_per_ms, crossings };
}

/** Returns what the analysis says of repeat number `repeat` (whole, from 0), the same whichever thread runs it. */
export function selfTestRepeat(plan: SelfTestPlan, repeat: number): SelfTestRepeat {
  const { front } = analyseSimulatedRun(plan.run, repeat);
  return {
    gamma: isNoFit(front.powerLaw) ? NO_ESTIMATE : estimateOf(front.powerLaw.gamma),
    v_sites_per_ms: isNoFit(front.linear) ? NO_ESTIMATE : estimateOf(front.linear.v_sites_per_ms),
    tau_us: front.points.map(({ fitted, time_us, error_us, low_us, high_us }) =>
      fitted ? { value: time_us, error: error_us, low: low_us, high: high_us } : null,
    ),
    verdict: front.verdict,
  };
}

const NO_ESTIMATE: IntervalEstimate = { value: null, error: null, low: null, high: null };

function estimateOf({ value, error, low, high }: IntervalEstimate): IntervalEstimate {
  return { value, error, low, high };
}
