import "server-only";
import { planTraces } from "@/lib/analyses/plan-analysis";
import { positionColumns } from "@/lib/analyses/analysis-positions";
import type { SweepMessage } from "@/lib/analyses/thread-task";
import type { JobContext } from "@/lib/jobs/job-context";
import { isProblem, problem, type Problem } from "@/lib/problem";
import { loadCalibration, loadSlot } from "@/lib/runs/load-counts";
import { pairCount } from "@/lib/science/correlators/pairs";
import { readoutFactors } from "@/lib/science/correlators/readout-correction";
import type { SweepInput } from "@/lib/science/studies/sweep-input";
import type { SweepResult } from "@/lib/science/studies/sweep-result";
import type { SweepTime, SweepTimeTask } from "@/lib/science/studies/sweep-time";
import type { StudyInputs } from "./load-study";
import { readingNotes } from "./simulated-analysis";
import { shiftedReadoutErrors } from "./sweep-readout";

const WHOLE_COUNT_SHIFTS = [-1, 0, 1];
const BYTES_PER_COUNT = 4;
/** Up counts of all pairs, times and thresholds are held at once. */
const MOST_BYTES = 400e6;
const COUNTING_SHARE = 0.9;

/** Sweeps the choices of an analysis, without a bootstrap. */
export async function runSweep(inputs: StudyInputs, context: JobContext): Promise<SweepResult | Problem> {
  const { analysis, version, sites } = inputs;
  const { parameters, provenance } = analysis;
  const thresholdShifts = version.countType === "uint16" ? WHOLE_COUNT_SHIFTS : [0];
  if (pairCount(version.sites) * version.timesUs.length * thresholdShifts.length * BYTES_PER_COUNT > MOST_BYTES) {
    return problem("too-large", `The pairs of ${version.sites} sites at ${version.timesUs.length} times are too many for one sweep.`);
  }
  const { traces } = parameters;
  const distancePlan = planTraces(traces.kind === "distance" ? traces : { kind: "distance" }, provenance.positions);
  if (isProblem(distancePlan)) return distancePlan;
  const calibration = await loadCalibration(context.database, { runId: analysis.runId, version: version.number }, version.sites);
  const readoutErrors = shiftedReadoutErrors(sites, thresholdShifts, calibration);
  const { throughOrigin, powerLawIn, covariance, ...rule } = parameters.front;
  const gamma = analysis.summary?.gamma;
  const input: SweepInput = {
    times_us: Float64Array.from(version.timesUs),
    positions: positionColumns(provenance.positions),
    brightIs: provenance.brightIs,
    estimator: parameters.estimator,
    rule,
    options: { throughOrigin, powerLawIn, covariance },
    traces: traces.kind === "distance" ? { kind: "distance" } : { kind: "reference", site: traces.site },
    readoutCorrected: parameters.readoutCorrection,
    thresholdShifts,
    readoutErrors,
    distancePlan,
    savedGamma: gamma?.value == null || gamma.error === null ? null : { value: gamma.value, error: gamma.error },
  };
  const times = await countTimes(inputs, input, context);
  context.progress("combinations of choices", COUNTING_SHARE);
  const message: SweepMessage = { input, times };
  const result = (await context.pool.run(message, { name: "sweepInThread", signal: context.signal })) as SweepResult;
  return { ...result, notes: [...readingNotes(inputs), ...result.notes] };
}

/** Sends every time to a thread, loading ahead by one so that threads do not wait for the database. */
async function countTimes({ analysis, version, sites }: StudyInputs, input: SweepInput, context: JobContext): Promise<SweepTime[]> {
  const key = { runId: analysis.runId, version: version.number };
  const shared = {
    sites: version.sites,
    thresholds: Float64Array.from(sites, ({ threshold }) => threshold),
    brightIs: input.brightIs,
    thresholdShifts: input.thresholdShifts,
    inverseFactors: input.readoutErrors.map((errors) => errors && readoutFactors(errors).map((factor) => 1 / factor)),
    distancePlan: input.distancePlan,
  };
  const results: SweepTime[] = [];
  const underWay = new Set<Promise<void>>();
  for (const [timeIndex, slot] of version.timeSlots.entries()) {
    context.signal.throwIfAborted();
    const { shots, counts } = await loadSlot(context.database, key, slot, version.sites);
    const message: SweepTimeTask = { ...shared, timeIndex, shots, counts };
    const running: Promise<void> = context.pool
      .run(message, { name: "sweepTimeInThread", transferList: [counts.buffer as ArrayBuffer], signal: context.signal })
      .then((result: SweepTime) => {
        results.push(result);
        context.progress(`counting with each threshold: ${results.length} of ${version.timeSlots.length} times`, (COUNTING_SHARE * results.length) / version.timeSlots.length);
      })
      .finally(() => underWay.delete(running));
    running.catch(() => undefined);
    underWay.add(running);
    if (underWay.size > context.pool.options.maxThreads) await Promise.race(underWay);
  }
  await Promise.all(underWay);
  return results;
}
