import { analyseTime, type TimeResult, type TimeTask } from "@/lib/science/correlators/analyse-time";
import { simultaneousBands, type SimultaneousBands } from "@/lib/science/correlators/simultaneous-bands";
import { packSpins, type BrightIs } from "@/lib/science/correlators/packed-spins";
import { analyseFront, type FrontAnalysis } from "@/lib/science/front/analyse-front";
import type { FrontFitOptions, FrontRule } from "@/lib/science/front/front-rule";
import { analyseTimeSoftly, type SoftTimeTask } from "@/lib/science/threshold-free/analyse-time-softly";
import { softenCounts } from "@/lib/science/threshold-free/soft-spins";
import type { TraceSet } from "@/lib/science/front/trace-set";
import { nullFrontRepeat, planNullFront, type NullFrontPlan } from "@/lib/science/studies/null-front";
import type { NullFrontInput } from "@/lib/science/studies/null-front-input";
import type { NullFrontRepeat } from "@/lib/science/studies/null-front-result";
import { planSelfTest, selfTestRepeat, type SelfTestPlan } from "@/lib/science/studies/self-test";
import type { SelfTestInput } from "@/lib/science/studies/self-test-input";
import type { SelfTestRepeat } from "@/lib/science/studies/self-test-result";
import type { StudyRefusal } from "@/lib/science/studies/study-refusal";
import { sweepFront } from "@/lib/science/studies/sweep";
import type { SweepInput } from "@/lib/science/studies/sweep-input";
import type { SweepResult } from "@/lib/science/studies/sweep-result";
import { sweepTime, type SweepTime, type SweepTimeTask } from "@/lib/science/studies/sweep-time";

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

/** One evolution time that is read without thresholds. */
export interface SoftTimeMessage extends Omit<SoftTimeTask, "spins"> {
  /** `[shot][site]` */
  counts: Uint16Array;
  shots: number;
  sites: number;
  /** `[site][bin]`, the soft spin of each count. */
  weights: Float64Array[];
}

/** Counts to soft spins to correlators with their joint bootstrap, for one time. */
export function softTimeInThread({ counts, shots, sites, weights, ...task }: SoftTimeMessage): TimeResult {
  return analyseTimeSoftly({ ...task, spins: softenCounts(counts, shots, sites, weights) });
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

/** One evolution time of a sensitivity sweep. */
export function sweepTimeInThread(task: SweepTimeTask): SweepTime {
  return sweepTime(task);
}

export interface SweepMessage {
  input: SweepInput;
  times: SweepTime[];
}

/** All combinations of a sensitivity sweep. */
export function sweepInThread({ input, times }: SweepMessage): SweepResult {
  return sweepFront(input, times);
}

/** A batch of a study's simulated repeats, `first` to `first + count − 1`. */
export interface RepeatsMessage<Plan> {
  plan: Plan;
  first: number;
  count: number;
}

export function nullFrontPlanInThread(input: NullFrontInput): NullFrontPlan | StudyRefusal {
  return planNullFront(input);
}

export function nullFrontRepeatsInThread({ plan, first, count }: RepeatsMessage<NullFrontPlan>): NullFrontRepeat[] {
  return Array.from({ length: count }, (_, at) => nullFrontRepeat(plan, first + at));
}

export function selfTestPlanInThread(input: SelfTestInput): SelfTestPlan | StudyRefusal {
  return planSelfTest(input);
}

export function selfTestRepeatsInThread({ plan, first, count }: RepeatsMessage<SelfTestPlan>): SelfTestRepeat[] {
  return Array.from({ length: count }, (_, at) => selfTestRepeat(plan, first + at));
}
