import "server-only";
import { database } from "@/db/connection";
import { invalidAt, isProblem, problem, type Problem } from "@/lib/problem";
import { listPairs, pairCount } from "@/lib/science/correlators/pairs";
import type { TracePlan } from "@/lib/science/correlators/trace-plan";
import type { FrontResult } from "@/lib/science/front/front-result";
import { planTraces } from "./plan-analysis";
import type { AnalysisRow } from "./find-analysis";
import { hasResult, readArray, readJson, readMarks } from "./result-arrays";
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
  /** `[t][pair]`, two-sided p-value of C = 0; null, as `significant`, in analyses from before it was kept. */
  pValue: Numbers[] | null;
  /** `[t][pair]`, true among the discoveries at a false-discovery rate of 5 % over all pairs and times (Benjamini and Hochberg). */
  significant: boolean[][] | null;
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
  /** `[trace][t]`, 95 % bands that hold whole traces; null where joint replicates are not kept. */
  bandLow: Numbers[] | null;
  bandHigh: Numbers[] | null;
  /** `[trace][t]`, as for pairs, or over all distances and times; null where unknown. */
  significant: boolean[][] | null;
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
  const marks = async (name: string) => marksInRows(await readMarks(database(), row.analysis.id, name), first, count, pairs);
  const isTested = await hasResult(database(), row.analysis.id, "pValue");
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
    fewFlips: await marks("fewFlips"),
    pValue: isTested ? await rows("pValue", pairs) : null,
    significant: isTested ? await marks("significant") : null,
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
    fewFlips: await readTraceMarks(row, "fewFlips", pairsOfTraces(tracePlan)),
    ...(await readJoint(row, tracePlan, rows)),
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
    fewFlips: await readTraceMarks(row, "fewFlips", columns),
    bandLow: null,
    bandHigh: null,
    significant: (await hasResult(database(), row.analysis.id, "significant")) ? await readTraceMarks(row, "significant", columns) : null,
  };
}

/** Returns distance-averaged traces from the saved pairs: values only, since errors of averages need joint replicates. */
export async function readDistanceTraces(row: AnalysisRow): Promise<Traces | Problem> {
  const plan = planTraces({ kind: "distance" }, row.analysis.provenance.positions);
  if (isProblem(plan)) return plan;
  const columns = pairsOfTraces(plan);
  const value = pickMeans(await readArray(database(), row.analysis.id, "value"), pairCount(row.siteNames.length), columns);
  const none = value.map((trace) => trace.map(() => null));
  const fewFlips = await readTraceMarks(row, "fewFlips", columns);
  return { kind: "distance", referenceSite: null, labels: plan.labels, distances: Array.from(plan.distances), times_us: row.timesUs, value, error: none, low: none, high: none, fewFlips, bandLow: null, bandHigh: null, significant: null };
}

/** What only joint replicates tell; null in analyses from before it was kept. */
async function readJoint(row: AnalysisRow, plan: TracePlan, rows: (name: string) => Promise<Numbers[]>) {
  const id = row.analysis.id;
  if (!(await hasResult(database(), id, "traceSignificant"))) return { bandLow: null, bandHigh: null, significant: null };
  const ofTraces = async () => marksInRows(await readMarks(database(), id, "traceSignificant"), 0, plan.labels.length, row.timesUs.length);
  return {
    bandLow: await rows("traceBandLow"),
    bandHigh: await rows("traceBandHigh"),
    significant: plan.kind === "reference" ? await readTraceMarks(row, "significant", pairsOfTraces(plan)) : await ofTraces(),
  };
}

/** `[trace]`, the pair indices of each trace. */
function pairsOfTraces({ labels, offsets, pairs }: TracePlan): number[][] {
  return labels.map((_, trace) => Array.from(pairs.subarray(offsets[trace], offsets[trace + 1])));
}

/** `[trace][t]`, true where any pair of the trace is marked. */
async function readTraceMarks(row: AnalysisRow, name: string, pairsOfTrace: number[][]): Promise<boolean[][]> {
  const marks = await readMarks(database(), row.analysis.id, name);
  const width = pairCount(row.siteNames.length);
  return pairsOfTrace.map((pairs) => row.timesUs.map((_, k) => pairs.some((pair) => marks[k * width + pair] === 1)));
}

/** Returns the front; one stored before influence was kept has none. */
export async function readFront(row: AnalysisRow): Promise<FrontResult> {
  const stored = await readJson<Omit<FrontResult, NewInFront> & Partial<Pick<FrontResult, NewInFront>>>(database(), row.analysis.id, "front");
  return { influence: [], failedFitShare: null, ...stored };
}

type NewInFront = "influence" | "failedFitShare";

function marksInRows(marks: Uint8Array, first: number, count: number, width: number): boolean[][] {
  return Array.from({ length: count }, (_, row) => Array.from(marks.subarray((first + row) * width, (first + row + 1) * width), Boolean));
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
