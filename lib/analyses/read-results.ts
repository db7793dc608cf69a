import "server-only";
import { database } from "@/db/connection";
import { invalidAt, isProblem, problem, type Problem } from "@/lib/problem";
import { listPairs, pairCount } from "@/lib/science/correlators/pairs";
import type { TracePlan } from "@/lib/science/correlators/trace-plan";
import type { FrontResult } from "@/lib/science/front/front-result";
import { planTraces } from "./plan-analysis";
import type { AnalysisRow } from "./find-analysis";
import { readArray, readJson, readMarks } from "./result-arrays";
import type { StoredPlan } from "./store-results";

/** Numbers as JSON has them: null where there is no number. */
export type Numbers = (number | null)[];

/** So many times and pairs fit into one answer: JSON text has at most 512 MB. */
const MOST_CELLS = 3_000_000;

export interface Correlators {
  times_us: number[];
  sites: number;
  siteNames: string[];
  /** `[t][i]` */
  mean: Numbers[];
  meanError: Numbers[];
  /** `[pair]` as `[i, j]`, i < j */
  pairs: [number, number][];
  /** `[t][pair]` */
  value: Numbers[];
  error: Numbers[];
  low: Numbers[];
  high: Numbers[];
  /** `[t][pair]`, true where an outcome is so rare that no bootstrap interval covers. */
  fewFlips: boolean[][];
}

export interface Traces {
  kind: "reference" | "distance";
  referenceSite: number | null;
  labels: string[];
  distances: number[];
  times_us: number[];
  /** `[trace][t]` */
  value: Numbers[];
  error: Numbers[];
  low: Numbers[];
  high: Numbers[];
  /** `[trace][t]`, true where any pair of the trace has few flips. */
  fewFlips: boolean[][];
}

/** Returns means and all pairs, at every time or at one. */
export async function readCorrelators(row: AnalysisRow, timeIndex?: number): Promise<Correlators | Problem> {
  const times = row.timesUs.length;
  const sites = row.siteNames.length;
  if (timeIndex !== undefined && timeIndex >= times) return invalidAt("time_index", `there are times 0 to ${times - 1}`);
  const first = timeIndex ?? 0;
  const count = timeIndex === undefined ? times : 1;
  const pairs = pairCount(sites);
  if (count * pairs > MOST_CELLS) return problem("too-large", `${count} times of ${pairs} pairs are too much for one answer; ask for one time after another with ?time_index=.`);
  const rows = async (name: string, width: number) => inRows(await readArray(database(), row.analysis.id, name, first * width, count * width), width);
  const marks = await readMarks(database(), row.analysis.id, "fewFlips");
  const list = listPairs(sites);
  return {
    times_us: row.timesUs.slice(first, first + count),
    sites,
    siteNames: row.siteNames,
    mean: await rows("mean", sites),
    meanError: await rows("meanError", sites),
    pairs: Array.from({ length: pairs }, (_, pair) => [list[2 * pair], list[2 * pair + 1]]),
    value: await rows("value", pairs),
    error: await rows("error", pairs),
    low: await rows("low", pairs),
    high: await rows("high", pairs),
    fewFlips: Array.from({ length: count }, (_, k) => Array.from(marks.subarray((first + k) * pairs, (first + k + 1) * pairs), Boolean)),
  };
}

/** Returns the traces the analysis was made with. */
export async function readTraces(row: AnalysisRow): Promise<Traces> {
  const id = row.analysis.id;
  const plan = await readJson<StoredPlan>(database(), id, "plan");
  const times = row.timesUs.length;
  const { parameters, provenance } = row.analysis;
  const tracePlan = planTraces(parameters.traces, provenance.positions);
  if (isProblem(tracePlan)) throw new Error(`the traces of analysis ${id} cannot be planned again: ${tracePlan.detail}`);
  const rows = async (name: string) => inRows(await readArray(database(), id, name), times);
  return {
    ...plan,
    times_us: row.timesUs,
    value: await rows("traceValue"),
    error: await rows("traceError"),
    low: await rows("traceLow"),
    high: await rows("traceHigh"),
    fewFlips: await readTraceMarks(row, pairsOfTraces(tracePlan)),
  };
}

/** Returns the traces of another reference site, from the saved pairs with their own errors and intervals. */
export async function readReferenceTraces(row: AnalysisRow, reference: number): Promise<Traces | Problem> {
  const sites = row.siteNames.length;
  if (reference >= sites) return invalidAt("reference", `the run has sites 0 to ${sites - 1}`);
  const plan = planTraces({ kind: "reference", site: reference }, row.analysis.provenance.positions);
  if (isProblem(plan)) return plan;
  const columns = pairsOfTraces(plan);
  const pick = async (name: string) => pickMeans(await readArray(database(), row.analysis.id, name), pairCount(sites), columns);
  return {
    kind: "reference",
    referenceSite: reference,
    labels: plan.labels,
    distances: Array.from(plan.distances),
    times_us: row.timesUs,
    value: await pick("value"),
    error: await pick("error"),
    low: await pick("low"),
    high: await pick("high"),
    fewFlips: await readTraceMarks(row, columns),
  };
}

/** Returns distance-averaged traces from the saved pairs: values only, since errors of averages need joint replicates. */
export async function readDistanceTraces(row: AnalysisRow): Promise<Traces | Problem> {
  const plan = planTraces({ kind: "distance" }, row.analysis.provenance.positions);
  if (isProblem(plan)) return plan;
  const columns = pairsOfTraces(plan);
  const value = pickMeans(await readArray(database(), row.analysis.id, "value"), pairCount(row.siteNames.length), columns);
  const none = value.map((trace) => trace.map(() => null));
  const fewFlips = await readTraceMarks(row, columns);
  return { kind: "distance", referenceSite: null, labels: plan.labels, distances: Array.from(plan.distances), times_us: row.timesUs, value, error: none, low: none, high: none, fewFlips };
}

/** `[trace]`, the pair indices of each trace. */
function pairsOfTraces({ labels, offsets, pairs }: TracePlan): number[][] {
  return labels.map((_, trace) => Array.from(pairs.subarray(offsets[trace], offsets[trace + 1])));
}

/** `[trace][t]`, true where any pair of the trace is marked. */
async function readTraceMarks(row: AnalysisRow, pairsOfTrace: number[][]): Promise<boolean[][]> {
  const marks = await readMarks(database(), row.analysis.id, "fewFlips");
  const width = pairCount(row.siteNames.length);
  return pairsOfTrace.map((pairs) => row.timesUs.map((_, k) => pairs.some((pair) => marks[k * width + pair] === 1)));
}

export function readFront(row: AnalysisRow): Promise<FrontResult> {
  return readJson<FrontResult>(database(), row.analysis.id, "front");
}

function inRows(values: Float64Array, width: number): Numbers[] {
  const count = width === 0 ? 0 : values.length / width;
  return Array.from({ length: count }, (_, row) => Array.from(values.subarray(row * width, (row + 1) * width), finite));
}

/** `[column set][t]` means over columns of an array `[t][column]`. */
function pickMeans(values: Float64Array, width: number, columnSets: number[][]): Numbers[] {
  const times = values.length / width;
  return columnSets.map((columns) =>
    Array.from({ length: times }, (_, k) => finite(columns.reduce((sum, column) => sum + values[k * width + column], 0) / columns.length)),
  );
}

function finite(value: number): number | null {
  return Number.isFinite(value) ? value : null;
}
