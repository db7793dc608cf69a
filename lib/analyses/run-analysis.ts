import "server-only";
import { and, eq } from "drizzle-orm";
import { analyses, type AnalysisParameters } from "@/db/schema/analyses";
import { detections, type DetectionSite } from "@/db/schema/detections";
import { runVersions } from "@/db/schema/run-versions";
import type { JobContext, JobRow, RefusedJob } from "@/lib/jobs/job-context";
import { isProblem, problem } from "@/lib/problem";
import { loadSlot } from "@/lib/runs/load-counts";
import type { ShotBlock } from "@/lib/runs/shot-block";
import type { TimeResult } from "@/lib/science/correlators/analyse-time";
import { collectTraces } from "@/lib/science/correlators/collect-traces";
import type { TracePlan } from "@/lib/science/correlators/trace-plan";
import type { TraceSet } from "@/lib/science/front/trace-set";
import { planTraces } from "./plan-analysis";
import { planReading, type Reading } from "./plan-reading";
import { removeArraysOfNobody } from "./result-arrays";
import { storeResults } from "./store-results";
import { summarise } from "./summarise";
import type { FrontAnswer, FrontMessage, SoftTimeMessage, TimeMessage } from "./thread-task";

type AnalysisRow = typeof analyses.$inferSelect;
type VersionRow = typeof runVersions.$inferSelect;

interface Inputs {
  analysis: AnalysisRow;
  version: VersionRow;
  sites: DetectionSite[];
}

/** The part of the way that the correlators take; the front and the storing take the rest. */
const CORRELATOR_SHARE = 0.9;

/** Computes an analysis in the worker's threads. The same parameters, version and detection give the same bytes on any number of threads. */
export async function runAnalysisJob(job: JobRow, context: JobContext): Promise<RefusedJob | null> {
  const inputs = await loadInputs(job, context);
  if (!inputs) return { problem: problem("not-found", "The run or the analysis has been removed.") };
  const { analysis, version, sites } = inputs;
  const { parameters, provenance } = analysis;
  const { seed, replicates } = parameters.bootstrap;
  const plan = planTraces(parameters.traces, provenance.positions);
  if (isProblem(plan)) return { problem: plan };
  const reading = planReading({ parameters, sites, countType: version.countType, brightIs: provenance.brightIs, seed, replicates });
  if (isProblem(reading)) return { problem: reading };
  const results = await analyseTimes(inputs, plan, reading, context);
  context.progress("crossings, fits and verdict", CORRELATOR_SHARE);
  const traces = collectTraces(plan, Float64Array.from(version.timesUs), results, replicates);
  const { front, bands } = await runFront(traces, parameters, context);
  context.progress("storing", 0.97);
  context.signal.throwIfAborted();
  try {
    // An earlier attempt may have written some of these; the same bytes replace themselves.
    await storeResults(context.database, analysis.id, { plan, parameters, results, traces, front, bands });
    await context.finish(async (transaction) => {
      await transaction
        .update(analyses)
        .set({ summary: summarise(front.front, results), finishedAt: new Date() })
        .where(eq(analyses.id, analysis.id));
      return { analysisId: analysis.id };
    });
  } catch (error) {
    await removeArraysOfNobody(context.database, analysis.id);
    throw error;
  }
  return null;
}

async function loadInputs(job: JobRow, { database }: JobContext): Promise<Inputs | null> {
  if (job.payload.kind !== "analysis") throw new Error(`job ${job.id} is no analysis`);
  const [row] = await database
    .select({ analysis: analyses, version: runVersions, sites: detections.sites })
    .from(analyses)
    .innerJoin(detections, eq(detections.id, analyses.detectionId))
    .innerJoin(runVersions, and(eq(runVersions.runId, analyses.runId), eq(runVersions.number, analyses.runVersion)))
    .where(and(eq(analyses.id, job.payload.analysisId), eq(analyses.groupId, job.groupId)));
  return row ?? null;
}

/** Sends every time to a thread, loading ahead by one so that threads do not wait for the database. */
async function analyseTimes(inputs: Inputs, plan: TracePlan, reading: Reading, context: JobContext): Promise<TimeResult[]> {
  const { analysis, version } = inputs;
  const key = { runId: analysis.runId, version: version.number };
  const times = version.timesUs.length;
  const results: TimeResult[] = [];
  const underWay = new Set<Promise<void>>();
  for (const [timeIndex, slot] of version.timeSlots.entries()) {
    context.signal.throwIfAborted();
    const loaded = await loadSlot(context.database, key, slot, version.sites);
    const { name, message } = timeMessage(inputs, plan, reading, timeIndex, loaded);
    const running: Promise<void> = context.pool
      .run(message, { name, transferList: [loaded.counts.buffer as ArrayBuffer], signal: context.signal })
      .then((result: TimeResult) => {
        results.push(result);
        context.progress(`correlators and bootstrap: ${results.length} of ${times} times`, (CORRELATOR_SHARE * results.length) / times);
      })
      .finally(() => underWay.delete(running));
    running.catch(() => undefined);
    underWay.add(running);
    if (underWay.size > context.pool.options.maxThreads) await Promise.race(underWay);
  }
  await Promise.all(underWay);
  return results.sort((first, second) => first.timeIndex - second.timeIndex);
}

type TimeCall = { name: "timeInThread"; message: TimeMessage } | { name: "softTimeInThread"; message: SoftTimeMessage };

function timeMessage({ analysis, version }: Inputs, plan: TracePlan, reading: Reading, timeIndex: number, { shots, counts }: ShotBlock): TimeCall {
  const { estimator, bootstrap } = analysis.parameters;
  const common = { timeIndex, shots, sites: version.sites, estimator, plan, ...bootstrap, pairErrors: "law" as const };
  if (reading.kind === "threshold") {
    const { thresholds, readout } = reading;
    return { name: "timeInThread", message: { ...common, counts, thresholds, brightIs: analysis.provenance.brightIs, readout } };
  }
  if (!(counts instanceof Uint16Array)) throw new Error(`analysis ${analysis.id} reads fractional counts without thresholds`);
  return { name: "softTimeInThread", message: { ...common, counts, weights: reading.weights, lawReplicates: reading.lawReplicates } };
}

function runFront(traces: TraceSet, { front }: AnalysisParameters, { pool, signal }: JobContext): Promise<FrontAnswer> {
  const { throughOrigin, powerLawIn, covariance, ...rule } = front;
  const message: FrontMessage = { traces, rule, options: { throughOrigin, powerLawIn, covariance } };
  return pool.run(message, { name: "frontInThread", signal }) as Promise<FrontAnswer>;
}
