import { exactReadoutCorrection } from "@/lib/science/correlators/readout-correction";
import { planReferenceTraces } from "@/lib/science/correlators/trace-plan";
import { findCrossing } from "@/lib/science/front/crossing";
import { createCrossingScratch } from "@/lib/science/front/crossing-kernel";
import type { FrontRule } from "@/lib/science/front/front-rule";
import type { TraceSet } from "@/lib/science/front/trace-set";
import { judgeSweep } from "@/lib/science/studies/judge-sweep";
import type { SweepChoices } from "@/lib/science/studies/sweep-choices";
import { crossingError_us } from "@/lib/science/studies/sweep-crossing-error";
import { designSweep } from "@/lib/science/studies/sweep-design";
import { fitSweepPoints, type SweepPoints } from "@/lib/science/studies/sweep-fit";
import type { SweepInput } from "@/lib/science/studies/sweep-input";
import type { SweepCombination, SweepResult } from "@/lib/science/studies/sweep-result";
import type { SweepTime } from "@/lib/science/studies/sweep-time";
import { sweepTraces, traceWindow } from "@/lib/science/studies/sweep-traces";

/**
 * Returns γ, β and v for about 200 combinations of choices (see `designSweep`) from the up counts of every evolution time,
 * in any order. No bootstrap: every combination has its errors by one rule, the delta method from the shots through crossings
 * and fits, so that they compare; ε's are taken as exact, points and times as independent. Throws RangeError when a time is
 * missing.
 */
export function sweepFront(input: SweepInput, times: readonly SweepTime[]): SweepResult {
  if (times.length !== input.times_us.length) throw new RangeError(`${times.length} results do not make ${input.times_us.length} evolution times`);
  const ordered = Array.from(times).sort((one, other) => one.timeIndex - other.timeIndex);
  const traces = traceSource(input, ordered);
  const combinations = designSweep({
    saved: savedChoices(input),
    rule: input.rule.rule,
    sites: input.positions.x.length,
    times: input.times_us.length,
    thresholdShifts: input.thresholdShifts,
    correctable: input.readoutErrors.map((errors) => errors !== null),
  }).map((choices): SweepCombination => {
    const rule: FrontRule = { ...input.rule, level: choices.level, method: choices.method, hold: choices.hold };
    return { choices, ...fitSweepPoints(pointsOf(traces(choices), rule), input.options) };
  });
  return judgeSweep(combinations, input.savedGamma);
}

function savedChoices({ rule, traces, readoutCorrected }: SweepInput): SweepChoices {
  return { thresholdShift: 0, readoutCorrection: readoutCorrected, traces, level: rule.level, method: rule.method, hold: rule.hold, firstLeftOut: 0, lastLeftOut: 0 };
}

/** Combinations that differ in level, method or window share their traces. */
function traceSource(input: SweepInput, times: readonly SweepTime[]): (choices: SweepChoices) => TraceSet {
  const made = new Map<string, TraceSet>();
  return (choices) => {
    const key = JSON.stringify([choices.thresholdShift, choices.readoutCorrection, choices.traces]);
    const whole = made.get(key) ?? tracesOf(input, times, choices);
    made.set(key, whole);
    return traceWindow(whole, choices.firstLeftOut, choices.lastLeftOut);
  };
}

function tracesOf(input: SweepInput, times: readonly SweepTime[], choices: SweepChoices): TraceSet {
  const shiftIndex = input.thresholdShifts.indexOf(choices.thresholdShift);
  const errors = choices.readoutCorrection ? input.readoutErrors[shiftIndex] : null;
  return sweepTraces(times, input.times_us, {
    plan: choices.traces.kind === "distance" ? input.distancePlan : planReferenceTraces(input.positions, choices.traces.site),
    shiftIndex,
    estimator: input.estimator,
    readout: errors === null ? null : exactReadoutCorrection(errors, input.brightIs),
  });
}

function pointsOf(traces: TraceSet, rule: FrontRule): SweepPoints {
  const scratch = createCrossingScratch(traces.times_us.length);
  const distance: number[] = [];
  const time_us: number[] = [];
  const error_us: number[] = [];
  traces.distances.forEach((d, trace) => {
    const crossing = findCrossing(traces, trace, rule, scratch);
    if (crossing.status !== "resolved" || !(d > 0) || !(crossing.time_us > 0)) return;
    const error = crossingError_us(traces, trace, crossing, rule, scratch);
    if (!(error > 0 && Number.isFinite(error))) return;
    distance.push(d);
    time_us.push(crossing.time_us);
    error_us.push(error);
  });
  return { distance: Float64Array.from(distance), time_us: Float64Array.from(time_us), error_us: Float64Array.from(error_us) };
}
