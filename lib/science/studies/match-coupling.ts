import { findCrossing } from "@/lib/science/front/crossing";
import { createCrossingScratch } from "@/lib/science/front/crossing-kernel";
import type { FrontPoint } from "@/lib/science/front/front-result";
import type { NullFrontInput } from "@/lib/science/studies/null-front-input";
import type { NullCoupling } from "@/lib/science/studies/null-front-result";
import { exactTraces } from "@/lib/science/studies/simulated-run";
import { nearestNeighbourLaws, nearestNeighbourMoments } from "@/lib/science/theory/nearest-neighbour";
import { refuseStudy, type StudyRefusal } from "@/lib/science/studies/study-refusal";

const MOST_STEPS = 12;
const CLOSE_ENOUGH = 1e-3;

/**
 * Returns the coupling of the null front: the given one, or the one at which the exact model crosses at the observed
 * time of the nearest fitted distance, on the run's own times. A refusal when no coupling does.
 */
export function couplingOf(input: NullFrontInput): NullCoupling | StudyRefusal {
  if (input.jMax_hz !== null) return { j_hz: input.jMax_hz, source: "given", matchedDistance: null };
  const target = nearestFitted(input.observedPoints);
  if (target === null) return refuseStudy("jMax_hz", "The coupling is not known, and the analysis has no fitted point to match it to.");
  let j_hz = firstGuess(target);
  for (let step = 0; step < MOST_STEPS; step++) {
    const ratio = modelCrossing_us(input, target, j_hz) / target.time_us;
    if (Math.abs(ratio - 1) < CLOSE_ENOUGH) return { j_hz, source: "matched", matchedDistance: target.distance };
    if (!(ratio > 0)) break;
    j_hz *= ratio;
  }
  return refuseStudy("jMax_hz", `No coupling makes the nearest-neighbour chain cross at the observed time at distance ${target.distance}; give J.`);
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
  const { model, positions, times_us, shotsPerTime, traces, rule } = input;
  const laws = nearestNeighbourLaws(model, positions.x.length, j_hz, times_us);
  const value = exactTraces(input, laws.map((law) => nearestNeighbourMoments(law).correlator));
  const set = {
    labels: traces.labels,
    distances: traces.distances,
    times_us,
    shotsPerTime,
    value,
    error: new Float64Array(value.length),
    replicateCount: 0,
    replicates: new Float64Array(0),
  };
  return findCrossing(set, trace, rule, createCrossingScratch(times_us.length)).time_us;
}
