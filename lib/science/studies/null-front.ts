import { isStudyRefusal, refuseStudy, type StudyRefusal } from "@/lib/science/studies/study-refusal";
import { sitesBeyondCorrection } from "@/lib/science/correlators/readout-correction";
import type { FrontPoint } from "@/lib/science/front/front-result";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { frontNumbers } from "@/lib/science/studies/front-numbers";
import { couplingOf } from "@/lib/science/studies/match-coupling";
import type { NullFrontInput } from "@/lib/science/studies/null-front-input";
import type { NoiseFreeFront, NullCoupling, NullFrontRepeat } from "@/lib/science/studies/null-front-result";
import { analyseSimulatedRun, readNoiseFree, type SimulatedRun } from "@/lib/science/studies/simulated-run";
import { nearestNeighbourLaws, nearestNeighbourMoments, type NearestNeighbourModel } from "@/lib/science/theory/nearest-neighbour";

/** Everything the repeats of a null front need; can be sent to a thread as it is. */
export interface NullFrontPlan {
  model: NearestNeighbourModel;
  coupling: NullCoupling;
  run: SimulatedRun;
  noiseFree: NoiseFreeFront;
  /** Points the studied analysis fitted. */
  observedPoints: number;
  /** The farthest of them. */
  observedReach: number;
}

const LEAST_SITES = 4;
/** Above this a repeat, whose shots are drawn exactly, takes minutes. */
const MOST_SITES = 128;

/**
 * Returns the plan of a null front: the exact nearest-neighbour chain at the run's times, shots, readout errors and
 * traces, and what the extractor reads from it without noise. Times in µs, couplings J/2π in hertz. A refusal for
 * anything but a chain of 4 to 128 sites, for sites beyond readout correction, and where J can neither be had nor matched.
 */
export function planNullFront(input: NullFrontInput): NullFrontPlan | StudyRefusal {
  const refusal = whyNoNullFront(input);
  if (refusal !== null) return refusal;
  const coupling = couplingOf(input);
  if (isStudyRefusal(coupling)) return coupling;
  const { model, positions, observedPoints, times_us } = input;
  const sites = positions.x.length;
  const laws = nearestNeighbourLaws(model, sites, coupling.j_hz, times_us);
  const run: SimulatedRun = { ...analysisOf(input), laws, purpose: RANDOM_PURPOSES.nullFront };
  const { front } = readNoiseFree(run, laws.map((law) => nearestNeighbourMoments(law).correlator));
  return {
    model,
    coupling,
    run,
    noiseFree: {
      ...frontNumbers(front),
      points: front.points.map(({ label, distance, time_us, fitted }) => ({ label, distance, time_us, fitted })),
    },
    observedPoints: observedPoints.filter(({ fitted }) => fitted).length,
    observedReach: reachOf(observedPoints),
  };
}

function analysisOf(input: NullFrontInput) {
  const { times_us, shotsPerTime, readoutErrors, readoutCorrected, brightIs, estimator, interval, traces, rule, options, replicates, seed } = input;
  return { times_us, shotsPerTime, readoutErrors, readoutCorrected, brightIs, estimator, interval, traces, rule, options, replicates, seed };
}

function whyNoNullFront({ positions, jMax_hz, readoutErrors, readoutCorrected }: NullFrontInput): StudyRefusal | null {
  const sites = positions.x.length;
  if (positions.y !== null) return refuseStudy("positions", "A null front needs a chain: the nearest-neighbour models here are solved exactly in one dimension only.");
  if (sites < LEAST_SITES || sites > MOST_SITES) return refuseStudy("positions", `A null front needs ${LEAST_SITES} to ${MOST_SITES} sites, not ${sites}.`);
  if (jMax_hz !== null && !(jMax_hz > 0 && Number.isFinite(jMax_hz))) return refuseStudy("jMax_hz", "The largest coupling must be above zero.");
  const refused = readoutErrors !== null && readoutCorrected ? sitesBeyondCorrection(readoutErrors) : [];
  if (refused.length > 0) return refuseStudy("readoutErrors", `Sites ${refused.join(", ")} cannot be corrected for readout.`);
  return null;
}

/** Returns what the extractor reads from repeat number `repeat` (whole, from 0), the same whichever thread runs it. */
export function nullFrontRepeat(plan: NullFrontPlan, repeat: number): NullFrontRepeat {
  const { front } = analyseSimulatedRun(plan.run, repeat);
  const points = front.points.filter(({ fitted }) => fitted).length;
  return { ...frontNumbers(front), points, reach: reachOf(front.points), verdict: front.verdict };
}

function reachOf(points: readonly FrontPoint[]): number {
  return Math.max(0, ...points.map(({ fitted, distance }) => (fitted ? distance : 0)));
}
