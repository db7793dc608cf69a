import { analyseTime, type TimeResult, type TimeTask } from "@/lib/science/correlators/analyse-time";
import { simultaneousBands, type SimultaneousBands } from "@/lib/science/correlators/simultaneous-bands";
import { packSpins, type BrightIs } from "@/lib/science/correlators/packed-spins";
import { analyseFront, type FrontAnalysis } from "@/lib/science/front/analyse-front";
import type { FrontFitOptions, FrontRule } from "@/lib/science/front/front-rule";
import type { TraceSet } from "@/lib/science/front/trace-set";

/** One evolution time as it is sent to a thread. */
export interface TimeMessage extends Omit<TimeTask, "spins"> {
  /** `[shot][site]` */
  counts: Uint16Array | Float32Array;
  shots: number;
  sites: number;
  thresholds: Float64Array;
  brightIs: BrightIs;
}

/** Counts to spins to correlators with their joint bootstrap, for one time. */
export function timeInThread({ counts, shots, sites, thresholds, brightIs, ...task }: TimeMessage): TimeResult {
  return analyseTime({ ...task, spins: packSpins(counts, shots, sites, thresholds, brightIs) });
}

export interface FrontMessage {
  traces: TraceSet;
  rule: FrontRule;
  options: FrontFitOptions;
}

export interface FrontAnswer {
  front: FrontAnalysis;
  bands: SimultaneousBands;
}

/** Traces and their replicates to crossings, fits and verdict, and to bands that hold whole traces. */
export function frontInThread({ traces, rule, options }: FrontMessage): FrontAnswer {
  return { front: analyseFront(traces, rule, options), bands: simultaneousBands(traces) };
}
