import "server-only";
import type { Database } from "@/db/connection";
import type { AnalysisParameters } from "@/db/schema/analyses";
import { twoSidedPValue } from "@/lib/science/correlators/independence-test";
import type { SimultaneousBands } from "@/lib/science/correlators/simultaneous-bands";
import type { TimeResult } from "@/lib/science/correlators/analyse-time";
import type { TracePlan } from "@/lib/science/correlators/trace-plan";
import type { FrontAnalysis } from "@/lib/science/front/analyse-front";
import type { TraceSet } from "@/lib/science/front/trace-set";
import { discoveries } from "@/lib/science/stats/false-discovery";
import { writeArray, writeJson } from "./result-arrays";

/** Joint replicates are kept with the analysis up to this size. */
const MOST_KEPT_REPLICATE_BYTES = 16 * 1024 * 1024;

export interface Results {
  plan: TracePlan;
  parameters: AnalysisParameters;
  /** `[k]` */
  results: TimeResult[];
  traces: TraceSet;
  front: FrontAnalysis;
  bands: SimultaneousBands;
}

/** The share of false discoveries that is borne on average when cells of the map are called significant. */
const FALSE_DISCOVERY_RATE = 0.05;

/** What a trace is, as it is kept beside the arrays. */
export interface StoredPlan {
  kind: "reference" | "distance";
  referenceSite: number | null;
  labels: string[];
  distances: number[];
}

type Field = "mean" | "meanError" | "value" | "error" | "low" | "high";

/** Writes all arrays of an analysis. They are not visible before the analysis is marked done. */
export async function storeResults(database: Database, analysisId: string, { plan, parameters, results, traces, front, bands }: Results): Promise<void> {
  const times = results.length;
  for (const field of ["mean", "meanError", "value", "error", "low", "high"] as const satisfies Field[]) {
    await writeArray(database, analysisId, field, byTime(results, (result) => result[field]));
  }
  await writeArray(database, analysisId, "fewFlips", marksByTime(results));
  const pValues = byTime(results, (result) => result.pValue);
  await writeArray(database, analysisId, "pValue", pValues);
  await writeArray(database, analysisId, "significant", { shape: pValues.shape, values: discoveries(pValues.values, FALSE_DISCOVERY_RATE) });
  const traceShape = [plan.distances.length, times];
  await writeArray(database, analysisId, "traceValue", { shape: traceShape, values: traces.value });
  await writeArray(database, analysisId, "traceError", { shape: traceShape, values: traces.error });
  await writeArray(database, analysisId, "traceLow", { shape: traceShape, values: byTrace(results, (result) => result.traceLow) });
  await writeArray(database, analysisId, "traceHigh", { shape: traceShape, values: byTrace(results, (result) => result.traceHigh) });
  await writeArray(database, analysisId, "traceBandLow", { shape: traceShape, values: bands.low });
  await writeArray(database, analysisId, "traceBandHigh", { shape: traceShape, values: bands.high });
  await writeArray(database, analysisId, "traceSignificant", { shape: traceShape, values: significantTraces(traces) });
  const { replicates } = parameters.bootstrap;
  await writeArray(database, analysisId, "tauReplicates", { shape: [plan.distances.length, replicates], values: front.tauReplicates });
  if (traces.replicates.byteLength <= MOST_KEPT_REPLICATE_BYTES) {
    await writeArray(database, analysisId, "traceReplicates", { shape: [times, plan.distances.length, replicates], values: traces.replicates });
  }
  await writeJson(database, analysisId, "plan", storedPlan(plan, parameters));
  await writeJson(database, analysisId, "front", front.front);
}

function storedPlan(plan: TracePlan, { traces }: AnalysisParameters): StoredPlan {
  return { kind: plan.kind, referenceSite: traces.kind === "reference" ? traces.site : null, labels: plan.labels, distances: Array.from(plan.distances) };
}

/** `[trace][k]`, by the deviation from 0 in standard errors: an average over pairs has no outcome counts of its own. */
function significantTraces({ value, error }: TraceSet): Uint8Array {
  return discoveries(value.map((c, at) => twoSidedPValue(c / error[at])), FALSE_DISCOVERY_RATE);
}

/** `[k][…]` */
function byTime(results: TimeResult[], pick: (result: TimeResult) => Float64Array) {
  const width = results.length > 0 ? pick(results[0]).length : 0;
  const values = new Float64Array(results.length * width);
  results.forEach((result, k) => values.set(pick(result), k * width));
  return { shape: [results.length, width], values };
}

function marksByTime(results: TimeResult[]) {
  const width = results.length > 0 ? results[0].fewFlips.length : 0;
  const values = new Uint8Array(results.length * width);
  results.forEach((result, k) => values.set(result.fewFlips, k * width));
  return { shape: [results.length, width], values };
}

/** `[trace][k]` */
function byTrace(results: TimeResult[], pick: (result: TimeResult) => Float64Array): Float64Array {
  const traces = results.length > 0 ? pick(results[0]).length : 0;
  const values = new Float64Array(traces * results.length);
  results.forEach((result, k) => pick(result).forEach((value, q) => (values[q * results.length + k] = value)));
  return values;
}
