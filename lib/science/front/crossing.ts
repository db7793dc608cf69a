import { crossingTime_us, loadSignal, orientSignal, type CrossingScratch } from "@/lib/science/front/crossing-kernel";
import type { FrontRule } from "@/lib/science/front/front-rule";
import type { TraceSet } from "@/lib/science/front/trace-set";
import { median } from "@/lib/science/stats/quantiles";

export type CrossingStatus = "resolved" | "at-start" | "unresolved" | "no-crossing";

/**
 * `level-in-noise`: the level is below two standard errors at the crossing. `level-above-0.2`: a high level on a
 * maximum of under 15 standard errors. `maximum-at-window-edge`: the largest signal is the first or last sample.
 */
export type CrossingWarning = "level-in-noise" | "level-above-0.2" | "maximum-at-window-edge";

/** The crossing of one trace, without its error bar. */
export interface TraceCrossing {
  status: CrossingStatus;
  /** µs, NaN without a crossing. Given for unresolved traces too, where it is only what the noise did. */
  time_us: number;
  /** The level L, NaN for an empty trace. */
  level: number;
  /** The oriented signal's maximum. */
  maximum: number;
  /** The time index k* of the maximum, −1 for an empty trace. */
  peakTimeIndex: number;
  warnings: CrossingWarning[];
}

const LEVEL_NOISE_RATIO = 2;
const HIGH_LEVEL = 0.2;
const HIGH_LEVEL_SIGNAL = 15;

/**
 * Returns where one trace of the set crosses its level. Uses and overwrites `scratch`, made for the set's times.
 * A trace whose maximum or its standard error is not a number is unresolved.
 */
export function findCrossing(
  traces: TraceSet,
  trace: number,
  rule: FrontRule,
  scratch: CrossingScratch,
): TraceCrossing {
  const offset = trace * traces.times_us.length;
  loadSignal(scratch, traces.times_us, traces.shotsPerTime, traces.value, offset);
  const peak = orientSignal(scratch, rule.absolute);
  const peakTimeIndex = peak < 0 ? -1 : scratch.timeIndex[peak];
  const maximum = peak < 0 ? NaN : Math.abs(scratch.signal[peak]);
  const peakError = peak < 0 ? NaN : traces.error[offset + peakTimeIndex];
  const level = levelOfTrace(traces, offset, peakTimeIndex, maximum, rule);
  const time_us = crossingTime_us(scratch, peak, level, rule);
  const status = statusOf(maximum, peakError, time_us, scratch.atStart, rule.minSignal);
  const atEdge = peak === 0 || peak === scratch.count - 1;
  const warnings =
    status === "unresolved" ? [] : warningsOf(traces, offset, { time_us, level, maximum, peakError, atEdge }, rule);
  return { status, time_us, level, maximum, peakTimeIndex, warnings };
}

function statusOf(
  maximum: number,
  peakError: number,
  time_us: number,
  atStart: boolean,
  minSignal: number,
): CrossingStatus {
  if (!(maximum > 0 && maximum >= minSignal * peakError)) return "unresolved";
  if (Number.isNaN(time_us)) return "no-crossing";
  return atStart ? "at-start" : "resolved";
}

function levelOfTrace(
  traces: TraceSet,
  offset: number,
  peakTimeIndex: number,
  maximum: number,
  rule: FrontRule,
): number {
  if (rule.rule === "fraction-of-max") return rule.level * maximum;
  if (rule.rule === "fixed-level") return rule.level;
  const errors = traces.error.subarray(offset, offset + peakTimeIndex + 1).filter((error) => Number.isFinite(error));
  return rule.level * median(errors);
}

function warningsOf(
  traces: TraceSet,
  offset: number,
  at: { time_us: number; level: number; maximum: number; peakError: number; atEdge: boolean },
  rule: FrontRule,
): CrossingWarning[] {
  const warnings: CrossingWarning[] = [];
  if (at.level < LEVEL_NOISE_RATIO * errorAt(traces, offset, at.time_us)) warnings.push("level-in-noise");
  const highLevel = rule.rule === "fraction-of-max" && rule.level > HIGH_LEVEL;
  if (highLevel && at.maximum < HIGH_LEVEL_SIGNAL * at.peakError) warnings.push("level-above-0.2");
  if (at.atEdge) warnings.push("maximum-at-window-edge");
  return warnings;
}

/** The trace's standard error at a time inside the window, linear between samples; NaN for NaN. */
function errorAt(traces: TraceSet, offset: number, time_us: number): number {
  const { times_us, error } = traces;
  if (Number.isNaN(time_us)) return NaN;
  let right = 0;
  while (right < times_us.length - 1 && times_us[right] < time_us) right += 1;
  if (right === 0 || times_us[right] === time_us) return error[offset + right];
  const share = (time_us - times_us[right - 1]) / (times_us[right] - times_us[right - 1]);
  return error[offset + right - 1] * (1 - share) + error[offset + right] * share;
}
