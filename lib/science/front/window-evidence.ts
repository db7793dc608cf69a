import type { FrontPoints } from "@/lib/science/front/front-points";
import { chosenPoints, LEAST_POINTS, whyNoFit } from "@/lib/science/front/front-points";
import type { Parameter } from "@/lib/science/front/front-result";
import { powerLawFrontOf } from "@/lib/science/front/power-law-front";
import type { TraceSet } from "@/lib/science/front/trace-set";

/** At most so many samples are averaged at the end of the window and at three quarters of it. */
const MOST_SAMPLES = 3;
const SAMPLES_PER_AVERAGE = 8;
const EARLIER_PLACE = 0.75;
/** A rise counts when it is both significant and large enough to move the level. */
const CLEAR_RISE = 2;
const NOTABLE_SHARE = 0.05;

/** What the window's end leaves open about a front. */
export interface WindowEvidence {
  /** Fitted points, and those among them whose trace no longer rises where the window ends. */
  points: number;
  inside: number;
  /** γ over the points inside alone; null when they are all points, or too few for a fit. */
  gammaInside: Parameter | null;
}

/**
 * Tells whether a trace is still rising where the window ends: the average of its last samples exceeds that at three quarters of the
 * window by more than two standard errors of the difference and more than a twentieth of the maximum. The maximum, and with it the level, are
 * then too low, and the crossing is read too early. Common practice, no source; what it does to false verdicts: docs/validation.md.
 */
export function isStillRising(traces: TraceSet, trace: number, peakTimeIndex: number): boolean {
  const times = traces.times_us.length;
  const samples = Math.min(MOST_SAMPLES, Math.floor(times / SAMPLES_PER_AVERAGE));
  if (samples === 0 || peakTimeIndex < 0) return false;
  const maximum = traces.value[trace * times + peakTimeIndex];
  const late = averageOf(traces, trace, times - samples, samples);
  const early = averageOf(traces, trace, Math.round(EARLIER_PLACE * (times - 1)) - Math.floor(samples / 2), samples);
  const rise = Math.sign(maximum) * (late.mean - early.mean);
  return rise > CLEAR_RISE * Math.hypot(late.error, early.error) && rise > NOTABLE_SHARE * Math.abs(maximum);
}

function averageOf({ times_us, value, error }: TraceSet, trace: number, first: number, samples: number) {
  let mean = 0;
  let variance = 0;
  for (let k = first; k < first + samples; k++) {
    const at = trace * times_us.length + k;
    mean += value[at] / samples;
    variance += (error[at] / samples) ** 2;
  }
  return { mean, error: Math.sqrt(variance) };
}

/** Returns the evidence of a fitted front; `isInside` is `[trace]`, `tau` `[trace][replicate]`, µs. */
export function windowEvidence(
  fitted: FrontPoints,
  isInside: readonly boolean[],
  tau: Float64Array,
  replicateCount: number,
  fittedIn: "log-time" | "time",
): WindowEvidence {
  const chosen = Array.from(fitted.trace.keys()).filter((p) => isInside[fitted.trace[p]]);
  const points = fitted.trace.length;
  const inner = chosenPoints(fitted, chosen);
  const canFit = chosen.length >= LEAST_POINTS && chosen.length < points && whyNoFit(inner.distance) === null;
  const fit = canFit ? powerLawFrontOf(inner, tau, replicateCount, fittedIn) : null;
  return { points, inside: chosen.length, gammaInside: fit === null || "reason" in fit ? null : fit.front.gamma };
}
