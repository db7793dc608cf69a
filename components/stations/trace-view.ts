import type { MapCrossing, FrontCurve as MapCurve } from "@/components/charts/front-overlay";
import type { FrontFitCurve } from "@/components/charts/front-chart-marks";
import type { MapData } from "@/components/charts/map-geometry";
import { siteText } from "@/components/charts/site-text";
import type { TraceLine } from "@/components/charts/trace-chart-marks";
import type { FrontCurve, FrontPoint, FrontResult } from "@/lib/science/front/front-result";
import { plainNumber } from "@/lib/number-text";

/** Traces as `GET /analyses/{id}/traces` answers them: arrays are `[trace][k]`, null where there is no number. */
export interface TracesAnswer {
  kind: "reference" | "distance";
  /** Site of a reference-site analysis. */
  referenceSite: number | null;
  labels: string[];
  distances: number[];
  times_us: number[];
  value: (number | null)[][];
  error: (number | null)[][];
  low: (number | null)[][];
  high: (number | null)[][];
  /** Bands that hold whole traces; null where joint replicates are not kept. */
  bandLow: (number | null)[][] | null;
  bandHigh: (number | null)[][] | null;
  /** Among the discoveries at a false-discovery rate of 5 %; null where unknown. */
  significant: boolean[][] | null;
}

export interface TraceMap {
  data: MapData;
  /** `[row][k]`; null for the reference's own row. */
  errors: ((number | null)[] | null)[];
  /** `[row][k]`, whether a cell is significant; null for the reference's own row, and as a whole where unknown. */
  significant: (boolean[] | null)[] | null;
  /** Trace of a row; null for the reference's own row. */
  traceOfRow: (number | null)[];
}

/** Returns the map of an analysis: rows are the sites in order (the reference's own is empty), or the distances. */
export function traceMap(traces: TracesAnswer, siteNames: string[]): TraceMap {
  const traceOfRow: (number | null)[] = traces.labels.map((_, trace) => trace);
  const reference = traces.kind === "reference" ? traces.referenceSite : null;
  if (reference !== null) traceOfRow.splice(reference, 0, null);
  const labelOf = (row: number, trace: number | null) =>
    reference === null ? plainNumber(traces.distances[trace ?? 0], 3) : (siteNames[row] ?? String(row));
  return {
    data: {
      rowName: reference === null ? "distance" : "site",
      times_us: traces.times_us,
      rows: traceOfRow.map((trace, row) => ({
        label: labelOf(row, trace),
        distance: trace === null ? null : traces.distances[trace],
        values: trace === null ? null : traces.value[trace],
      })),
    },
    errors: traceOfRow.map((trace) => (trace === null ? null : traces.error[trace])),
    significant: traces.significant && traceOfRow.map((trace) => (trace === null ? null : (traces.significant?.[trace] ?? null))),
    traceOfRow,
  };
}

/** Returns the crossings of a front at the rows of its map. */
export function mapCrossings(front: FrontResult, traceOfRow: (number | null)[]): MapCrossing[] {
  return traceOfRow.flatMap((trace, row) => {
    const point = trace === null ? undefined : front.points[trace];
    if (!point) return [];
    return [{ row, time_us: point.time_us, low_us: point.low_us, high_us: point.high_us, resolved: point.status === "resolved" }];
  });
}

/** Returns both fits as lines for the map, samples without a time left out. */
export function mapCurves(front: FrontResult): MapCurve[] {
  return fitCurves(front).map(({ name, distances, times_us }) => ({ name, distances, times_us }));
}

/** Returns both fits with their bands for the distance–time chart. */
export function fitCurves(front: FrontResult): FrontFitCurve[] {
  return [curveOf("linear", front.curves.linear), curveOf("power law", front.curves.powerLaw)].filter((curve) => curve !== null);
}

function curveOf(name: FrontFitCurve["name"], curve: FrontCurve | null): FrontFitCurve | null {
  if (!curve) return null;
  const samples = curve.time_us.flatMap((time, q) => (time === null ? [] : [{ time, q }]));
  return {
    name,
    distances: samples.map(({ q }) => curve.distance[q]),
    times_us: samples.map(({ time }) => time),
    low_us: samples.map(({ q }) => curve.low_us[q]),
    high_us: samples.map(({ q }) => curve.high_us[q]),
  };
}

/** Returns what a trace is called on the page: the site's own name, or its distance. */
export function traceName(traces: TracesAnswer, trace: number, siteNames: string[]): string {
  if (traces.kind === "distance" || traces.referenceSite === null) return traces.labels[trace];
  const site = trace < traces.referenceSite ? trace : trace + 1;
  return siteText(siteNames[site] ?? String(site));
}

/** Returns one trace as a line, with its crossing when the front has one. */
export function traceLine(traces: TracesAnswer, trace: number, point?: FrontPoint): TraceLine {
  return {
    label: traces.labels[trace],
    times_us: traces.times_us,
    value: traces.value[trace],
    low: traces.low[trace],
    high: traces.high[trace],
    bandLow: traces.bandLow?.[trace],
    bandHigh: traces.bandHigh?.[trace],
    crossing:
      point?.time_us === null || point?.time_us === undefined
        ? undefined
        : { time_us: point.time_us, low_us: point.low_us, high_us: point.high_us, level: point.level, resolved: point.status === "resolved" },
  };
}
