import { analyseTime, type TimeResult } from "@/lib/science/correlators/analyse-time";
import { collectTraces } from "@/lib/science/correlators/collect-traces";
import type { CorrelatorEstimator } from "@/lib/science/correlators/connected-correlators";
import type { IntervalKind } from "@/lib/science/correlators/error-bars";
import type { BrightIs } from "@/lib/science/correlators/packed-spins";
import { listPairs } from "@/lib/science/correlators/pairs";
import { exactReadoutCorrection, readoutFactors, type ReadoutErrors } from "@/lib/science/correlators/readout-correction";
import type { TracePlan } from "@/lib/science/correlators/trace-plan";
import { analyseFront, type FrontAnalysis } from "@/lib/science/front/analyse-front";
import type { FrontFitOptions, FrontRule } from "@/lib/science/front/front-rule";
import type { TraceSet } from "@/lib/science/front/trace-set";
import { createRandomStream } from "@/lib/science/stats/philox";
import type { RandomPurpose } from "@/lib/science/stats/random-purposes";
import { drawShots } from "@/lib/science/theory/draw-shots";
import { flipReadout } from "@/lib/science/theory/readout-flips";
import type { SpinLaw } from "@/lib/science/theory/spin-law";

/** How a simulated run is read and analysed: everything as in the analysis that is studied. */
export interface SimulatedAnalysis {
  /** `[k]`, µs, strictly increasing. */
  times_us: Float64Array;
  /** `[k]`, kept shots M_k, whole. */
  shotsPerTime: Float64Array;
  /** The flips that readout makes, `[site]`; null for none. */
  readoutErrors: ReadoutErrors | null;
  /** Whether the analysis undoes them. */
  readoutCorrected: boolean;
  brightIs: BrightIs;
  estimator: CorrelatorEstimator;
  interval: IntervalKind;
  traces: TracePlan;
  rule: FrontRule;
  options: FrontFitOptions;
  /** Bootstrap replicates of one repeat, from 2; more than 200 are taken as 200. */
  replicates: number;
  seed: number;
}

/** A simulated run whose repeats can be drawn one by one, in any order and on any thread. */
export interface SimulatedRun extends SimulatedAnalysis {
  /** `[k]` */
  laws: SpinLaw[];
  purpose: RandomPurpose;
}

const MOST_REPLICATES = 200;
/** Streams beside those of the times 0, 1, …: the seed of a repeat's bootstrap. */
const BOOTSTRAP_SEED_INDEX = 0xffffffff;
/** The repeat that only gives the errors to expect, never one of a study's own. */
const PILOT = 0xffffffff;

/**
 * Returns the analysis of one simulated repeat: shots drawn from the laws, flipped by readout, and put through the
 * correlators, bootstrap and fits of any analysis. The ε's are taken as known exactly.
 */
export function analyseSimulatedRun(run: SimulatedRun, repeat: number): FrontAnalysis {
  return analyseFront(simulateTraces(run, repeat), run.rule, run.options);
}

function simulateTraces(run: SimulatedRun, repeat: number): TraceSet {
  const replicates = Math.min(MOST_REPLICATES, run.replicates);
  const results = run.laws.map((_, k) => analyseTimeOf(run, repeat, k, replicates));
  return collectTraces(run.traces, run.times_us, results, replicates);
}

function analyseTimeOf(run: SimulatedRun, repeat: number, k: number, replicates: number): TimeResult {
  const { readoutErrors, readoutCorrected, brightIs, estimator, interval, traces } = run;
  const stream = createRandomStream(run.seed, run.purpose, k, repeat);
  const shots = drawShots(run.laws[k], run.shotsPerTime[k], stream);
  return analyseTime({
    timeIndex: k,
    spins: readoutErrors === null ? shots : flipReadout(shots, readoutErrors, brightIs, stream),
    estimator,
    readout: readoutErrors !== null && readoutCorrected ? exactReadoutCorrection(readoutErrors, brightIs) : null,
    plan: traces,
    replicates,
    seed: bootstrapSeed(run, repeat),
    interval,
    // Simulated shots do not drift, and their order carries no meaning.
    blockLength: 1,
    pairErrors: "law",
  });
}

function bootstrapSeed(run: SimulatedRun, repeat: number): number {
  const stream = createRandomStream(run.seed, run.purpose, BOOTSTRAP_SEED_INDEX, repeat);
  return (stream.nextUint32() >>> 11) * 0x100000000 + stream.nextUint32();
}

/**
 * Returns what the extractor reads from the exact correlators `[k][pair]` of the run's laws. Weights of the fits, and
 * the test for a resolved signal, take errors and replicates from one simulated pilot run, moved onto the exact values.
 */
export function readNoiseFree(run: SimulatedRun, correlators: readonly Float64Array[]): FrontAnalysis {
  const pilot = simulateTraces(run, PILOT);
  const value = exactTraces(run, correlators);
  const times = run.times_us.length;
  const traces = run.traces.distances.length;
  const replicates = pilot.replicates.map((replicate, at) => {
    const row = Math.floor(at / pilot.replicateCount);
    const place = (row % traces) * times + Math.floor(row / traces);
    return replicate - pilot.value[place] + value[place];
  });
  return analyseFront({ ...pilot, value, replicates }, run.rule, run.options);
}

/**
 * Returns the traces `[trace][k]` that infinitely many shots would show, from exact correlators `[k][pair]`: shrunk by
 * readout unless the analysis corrects it.
 */
export function exactTraces(run: SimulatedAnalysis, correlators: readonly Float64Array[]): Float64Array {
  const { traces, readoutErrors, readoutCorrected } = run;
  const times = correlators.length;
  const shrink = readoutErrors === null || readoutCorrected ? null : readoutFactors(readoutErrors);
  const sites = shrink === null ? null : listPairs(shrink.length);
  const value = new Float64Array(traces.distances.length * times);
  correlators.forEach((correlator, k) => {
    traces.distances.forEach((_, q) => {
      const pairs = traces.pairs.subarray(traces.offsets[q], traces.offsets[q + 1]);
      for (const pair of pairs) {
        const factor = shrink === null || sites === null ? 1 : shrink[sites[2 * pair]] * shrink[sites[2 * pair + 1]];
        value[q * times + k] += (factor * correlator[pair]) / pairs.length;
      }
    });
  });
  return value;
}

/** Returns the exact traces as the front reads them, without errors and replicates. */
export function exactTraceSet(run: SimulatedAnalysis, correlators: readonly Float64Array[]): TraceSet {
  const value = exactTraces(run, correlators);
  return {
    labels: run.traces.labels,
    distances: run.traces.distances,
    times_us: run.times_us,
    shotsPerTime: run.shotsPerTime,
    value,
    error: new Float64Array(value.length),
    replicateCount: 0,
    replicates: new Float64Array(0),
  };
}
