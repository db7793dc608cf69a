import { findCrossing } from "@/lib/science/front/crossing";
import { createCrossingScratch } from "@/lib/science/front/crossing-kernel";
import type { FrontPoint } from "@/lib/science/front/front-result";
import type { NullFrontInput } from "@/lib/science/studies/null-front-input";
import type { NullCoupling } from "@/lib/science/studies/null-front-result";
import { exactTraceSet } from "@/lib/science/studies/simulated-run";
import { nearestNeighbourLaws, nearestNeighbourMoments } from "@/lib/science/theory/nearest-neighbour";
import { refuseStudy, type StudyRefusal } from "@/lib/science/studies/study-refusal";

const MOST_STEPS = 12;
const CLOSE_ENOUGH = 1e-3;
/** What a scanned coupling may miss the observed time by, as a logarithm. */
const NEAR_ENOUGH = 0.1;
const SCANNED = 33;
const SCAN_RANGE = 4;

/**
 * Returns the coupling of the null front: the given one, or the one at which the exact model crosses at the observed
 * time of the nearest fitted distance, on the run's own times. A refusal when no coupling does.
 */
export function couplingOf(input: NullFrontInput): NullCoupling | StudyRefusal {
  if (input.jMax_hz !== null) return { j_hz: input.jMax_hz, source: "given", matchedDistance: null };
  const target = nearestFitted(input.observedPoints);
  if (target === null) return refuseStudy("jMax_hz", "The coupling is not known, and the analysis has no fitted point to match it to.");
  const j_hz = iterate(input, target) ?? scan(input, target);
  return j_hz === null
    ? refuseStudy("jMax_hz", `No coupling makes the nearest-neighbour chain cross at the observed time at distance ${target.distance}; give J.`)
    : { j_hz, source: "matched", matchedDistance: target.distance };
}

/** Times scale as 1/J, but for what the window and the grid of times do. */
function iterate(input: NullFrontInput, target: Target): number | null {
  let j_hz = firstGuess(target);
  for (let step = 0; step < MOST_STEPS; step++) {
    const ratio = modelCrossing_us(input, target, j_hz) / target.time_us;
    if (Math.abs(ratio - 1) < CLOSE_ENOUGH) return j_hz;
    if (!(ratio > 0)) return null;
    j_hz *= ratio;
  }
  return null;
}

/** Where another of the model's maxima becomes the largest, the crossing time leaps, and only trying finds the nearest coupling. */
function scan(input: NullFrontInput, target: Target): number | null {
  const guess = firstGuess(target);
  let best = { j_hz: NaN, miss: NEAR_ENOUGH };
  for (let step = 0; step < SCANNED; step++) {
    const j_hz = guess * SCAN_RANGE ** ((2 * step) / (SCANNED - 1) - 1);
    const miss = Math.abs(Math.log(modelCrossing_us(input, target, j_hz) / target.time_us));
    if (miss < best.miss) best = { j_hz, miss };
  }
  return Number.isNaN(best.j_hz) ? null : best.j_hz;
}

interface Target {
  trace: number;
  distance: number;
  time_us: number;
}

function nearestFitted(points: readonly FrontPoint[]): Target | null {
  let nearest: Target | null = null;
  points.forEach(({ fitted, distance, time_us }, trace) => {
    if (fitted && time_us !== null && (nearest === null || distance < nearest.distance)) nearest = { trace, distance, time_us };
  });
  return nearest;
}

/** In the bulk the signal of distance n first reaches a tenth of its maximum near 4Jt = n − 0.64 ∛n. */
function firstGuess({ distance, time_us }: Target): number {
  const argument = Math.max(0.37, distance - 0.64 * Math.cbrt(distance));
  return ((argument / 4 / time_us) * 1e6) / (2 * Math.PI);
}

function modelCrossing_us(input: NullFrontInput, { trace }: Target, j_hz: number): number {
  const laws = nearestNeighbourLaws(input.model, input.positions.x.length, j_hz, input.times_us);
  const exact = exactTraceSet(input, laws.map((law) => nearestNeighbourMoments(law).correlator));
  return findCrossing(exact, trace, input.rule, createCrossingScratch(input.times_us.length)).time_us;
}
