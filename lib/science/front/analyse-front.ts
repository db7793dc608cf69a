import { crossingCovariance } from "@/lib/science/front/crossing-covariance";
import { influenceOf } from "@/lib/science/front/influence";
import { compareFits } from "@/lib/science/front/comparison";
import { findCrossing, type TraceCrossing } from "@/lib/science/front/crossing";
import { createCrossingScratch } from "@/lib/science/front/crossing-kernel";
import { frontCurve, linearTime_us, powerLawTime_us } from "@/lib/science/front/front-curves";
import { frontPointsOf, whyNoFit, whyNotFitted, type FrontPoints } from "@/lib/science/front/front-points";
import type { FrontPoint, FrontResult, NoFit } from "@/lib/science/front/front-result";
import { DEFAULT_FRONT_FIT_OPTIONS, type FrontFitOptions, type FrontRule } from "@/lib/science/front/front-rule";
import { frontWarnings } from "@/lib/science/front/front-warnings";
import { linearFrontOf } from "@/lib/science/front/linear-front";
import { finiteOrNull } from "@/lib/science/front/parameter";
import { powerLawFrontOf } from "@/lib/science/front/power-law-front";
import { replicateCrossings, spreadOfCrossings, type CrossingSpread } from "@/lib/science/front/replicate-crossings";
import type { TraceSet } from "@/lib/science/front/trace-set";
import { velocityOf } from "@/lib/science/front/velocity";
import { judgeFront } from "@/lib/science/front/verdict";
import { isStillRising, windowEvidence } from "@/lib/science/front/window-evidence";

/** A front with the replicates behind it. */
export interface FrontAnalysis {
  front: FrontResult;
  /** `[trace][replicate]`, µs, NaN where a replicate has no crossing. */
  tauReplicates: Float64Array;
}

/**
 * Returns the crossing times of the traces, both front fits, their comparison, the verdict of the full-pipeline
 * bootstrap and the velocities. Without replicates there are crossing times, but no error bars and no fit.
 */
export function analyseFront(
  traces: TraceSet,
  rule: FrontRule,
  options: FrontFitOptions = DEFAULT_FRONT_FIT_OPTIONS,
): FrontAnalysis {
  const crossings = crossingsOf(traces, rule);
  const levels = Float64Array.from(crossings, (crossing) => crossing.level);
  const tau = replicateCrossings(traces, rule, levels);
  const count = traces.replicateCount;
  const spreads = crossings.map((_, j) => spreadOfCrossings(tau.subarray(j * count, (j + 1) * count)));
  const reasons = crossings.map((crossing, j) => whyNotFitted(traces.distances[j], crossing, spreads[j]));
  const points = crossings.map((crossing, j) => frontPoint(traces, j, crossing, spreads[j], reasons[j] === null));
  return { front: frontOf(traces, rule, options, { crossings, spreads, reasons, points, tau }), tauReplicates: tau };
}

/** Returns the crossing of every trace, without error bars. */
export function crossingsOf(traces: TraceSet, rule: FrontRule): TraceCrossing[] {
  const scratch = createCrossingScratch(traces.times_us.length);
  return traces.labels.map((_, j) => findCrossing(traces, j, rule, scratch));
}

interface Crossings {
  crossings: TraceCrossing[];
  spreads: CrossingSpread[];
  reasons: (string | null)[];
  points: FrontPoint[];
  tau: Float64Array;
}

function frontOf(traces: TraceSet, rule: FrontRule, options: FrontFitOptions, found: Crossings): FrontResult {
  const { crossings, spreads, reasons, points, tau } = found;
  const count = traces.replicateCount;
  const used = Array.from(reasons.keys()).filter((j) => reasons[j] === null);
  const { fitted, noFit } = pointsToFit(frontPointsOf(used, traces.distances, crossings, spreads), tau, count, options);
  const linear = noFit === null ? linearFrontOf(fitted, tau, count, options.throughOrigin) : null;
  const attempt = noFit === null ? powerLawFrontOf(fitted, tau, count, options.powerLawIn) : { reason: noFit };
  const powerLaw = "reason" in attempt ? null : attempt;
  const noPowerLaw = "reason" in attempt ? attempt.reason : "";
  const noLinear: NoFit = { reason: noFit ?? "" };
  const isInside = crossings.map(({ peakTimeIndex }, j) => !isStillRising(traces, j, peakTimeIndex));
  return {
    points,
    linear: linear?.front ?? noLinear,
    powerLaw: powerLaw?.front ?? { reason: noPowerLaw },
    comparison: compareFits(linear?.front ?? null, powerLaw?.front ?? null),
    ...judgeFront(powerLaw?.front ?? null, noPowerLaw, powerLaw && windowEvidence(fitted, isInside, tau, count, options.powerLawIn)),
    velocity: velocityOf(fitted, tau, count, linear, powerLaw),
    warnings: frontWarnings(points, rule, count, powerLaw?.replicates.fitted ?? null),
    unresolved: points.flatMap(({ label, distance, status }, j) => {
      const reason = reasons[j];
      return reason === null ? [] : [{ label, distance, status, reason }];
    }),
    influence: powerLaw === null ? [] : influenceOf(fitted, traces.labels, options, powerLaw.front.gamma),
    failedFitShare: powerLaw === null || count === 0 ? null : 1 - powerLaw.front.replicatesFitted / count,
    curves: {
      linear: linear === null ? null : frontCurve(fitted, linear, linearTime_us),
      powerLaw: powerLaw === null ? null : frontCurve(fitted, powerLaw, powerLawTime_us),
    },
  };
}

/** The points with the weights they are asked to have, or why they allow no fit. */
function pointsToFit(fitted: FrontPoints, tau: Float64Array, count: number, { covariance }: FrontFitOptions): { fitted: FrontPoints; noFit: string | null } {
  const noFit = whyNoFit(fitted.distance);
  if (noFit !== null || covariance === "diagonal") return { fitted, noFit };
  const joint = crossingCovariance(fitted.trace, tau, count);
  return "reason" in joint ? { fitted, noFit: joint.reason } : { fitted: { ...fitted, covariance: joint }, noFit: null };
}

function frontPoint(
  traces: TraceSet,
  trace: number,
  crossing: TraceCrossing,
  spread: CrossingSpread,
  fitted: boolean,
): FrontPoint {
  const { status, time_us, level, warnings } = crossing;
  return {
    label: traces.labels[trace],
    distance: traces.distances[trace],
    time_us: status === "unresolved" ? null : finiteOrNull(time_us),
    error_us: finiteOrNull(spread.error_us),
    low_us: finiteOrNull(spread.low_us),
    high_us: finiteOrNull(spread.high_us),
    status,
    failedShare: finiteOrNull(spread.failedShare),
    level: finiteOrNull(level),
    fitted,
    warnings,
  };
}
