"use client";

import { useCallback, useMemo } from "react";
import useSWR from "swr";
import { colourLimit } from "@/components/charts/map-geometry";
import { CorrelationMap } from "@/components/charts/correlation-map";
import { MatrixChart } from "@/components/charts/matrix-chart";
import { siteText } from "@/components/charts/site-text";
import { TraceChart } from "@/components/charts/trace-chart";
import { fetchJson } from "@/components/data/fetch-json";
import { useUrlState } from "@/components/shell/use-url-state";
import { plainNumber } from "@/lib/number-text";
import { ExportLinks } from "./export-links";
import { TimeSlider } from "./time-slider";
import { traceLine, traceMap, traceName, type TracesAnswer } from "./trace-view";

interface CorrelationsStationProps {
  analysisId: string;
  siteNames: string[];
  /** The analysis's own traces, for the first paint. */
  traces: TracesAnswer;
}

/** All pairs at one time, `[pair]` in the order of `pairs`. */
interface MatrixAnswer {
  pairs: [number, number][];
  value: (number | null)[][];
  error: (number | null)[][];
}

/** The map for any reference site or by distance, the full matrix at one time, and the trace of the chosen row. */
export function CorrelationsStation({ analysisId, siteNames, traces: own }: CorrelationsStationProps) {
  const ownView = own.referenceSite === null ? "distance" : String(own.referenceSite);
  const [view, setView] = useUrlState("reference", ownView);
  const [rowText, setRow] = useUrlState("row", "");
  const [timeText, setTime] = useUrlState("time", String(Math.floor(own.times_us.length / 2)));
  const k = Math.max(0, Math.min(own.times_us.length - 1, Number.parseInt(timeText, 10) || 0));
  const query = view === "distance" ? "kind=distance" : `reference=${view}`;
  const { data: shown = own, error, isLoading } = useSWR<TracesAnswer>(
    view === ownView ? null : `/api/v1/analyses/${analysisId}/traces?${query}`,
    fetchJson,
    { keepPreviousData: true },
  );
  const traces = view === ownView ? own : shown;
  const map = useMemo(() => traceMap(traces, siteNames), [traces, siteNames]);
  const [mask, setMask] = useUrlState("mask", "off");
  const limit = colourLimit(map.data.rows);
  const firstTrace = map.traceOfRow.findIndex((trace) => trace !== null);
  const row = rowText === "" || map.traceOfRow[Number(rowText)] == null ? firstTrace : Number(rowText);
  const trace = map.traceOfRow[row] ?? 0;
  return (
    <>
      <div className="mb-4 flex flex-wrap items-end gap-x-6 gap-y-2">
        <label className="block">
          <span className="label block">Map by</span>
          <select className="field w-auto" value={view} onChange={(event) => setView(event.target.value)}>
            <option value="distance">distance, averaged over pairs</option>
            {siteNames.map((name, site) => (
              <option key={site} value={site}>
                reference {siteText(name)}
              </option>
            ))}
          </select>
        </label>
        {map.significant && (
          <label className="flex min-h-9 items-center gap-2">
            <input type="checkbox" className="size-4 accent-(--ink)" checked={mask === "on"} onChange={(event) => setMask(event.target.checked ? "on" : "off")} />
            significant cells only
          </label>
        )}
        {map.significant && mask === "on" && (
          <p className="label max-w-[48ch]">Of the cells left, 5 % on average are there by chance (Benjamini and Hochberg); a blank cell is not a zero.</p>
        )}
        {view !== ownView && view === "distance" && (
          <p className="label max-w-[48ch]">Averaged from the saved pairs. Joint error bars of averages belong to an analysis made by distance.</p>
        )}
        {error && <p className="text-error" role="alert">{error instanceof Error ? error.message : "The map could not be read."}</p>}
      </div>
      <div className="grid grid-cols-1 gap-x-8 gap-y-7 lg:grid-cols-[3fr_2fr]">
        <div aria-busy={isLoading} className={`min-w-0 space-y-7 transition-opacity ${isLoading ? "opacity-50" : ""}`}>
          <CorrelationMap
            title="Connected correlators"
            caption="pick a row to see its trace"
            data={map.data}
            errors={map.errors}
            shown={mask === "on" ? map.significant : null}
            limit={limit}
            height={390}
            chosenRow={row}
            onPickRow={(picked) => setRow(String(picked))}
            actions={<ExportLinks analysisId={analysisId} figure={view === ownView ? "map" : null} data="correlators" />}
          />
          <TraceChart
            title={`C against time, ${traceName(traces, trace, siteNames)}`}
            caption={bandCaption(traces, trace)}
            line={traceLine(traces, trace)}
            errors={traces.error[trace]}
            height={240}
            actions={<ExportLinks analysisId={analysisId} figure={view === ownView ? "traces" : null} data="traces" query={view === ownView ? "" : query} />}
          />
        </div>
        <div className="min-w-0">
          <TimeSlider times_us={own.times_us} k={k} onChange={(next) => setTime(String(next))} />
          <MatrixAtTime analysisId={analysisId} siteNames={siteNames} k={k} time_us={own.times_us[k]} limit={limit} />
        </div>
      </div>
    </>
  );
}

function bandCaption(traces: TracesAnswer, trace: number): string {
  if (traces.low[trace].every((low) => low === null)) return "without error bars";
  return traces.bandLow ? "dark: 95 % at each time; light: 95 % for the whole trace" : "with 95 % intervals at each time";
}

interface MatrixAtTimeProps {
  analysisId: string;
  siteNames: string[];
  k: number;
  time_us: number;
  limit: number;
}

function MatrixAtTime({ analysisId, siteNames, k, time_us, limit }: MatrixAtTimeProps) {
  const { data, error, isLoading } = useSWR<MatrixAnswer>(`/api/v1/analyses/${analysisId}/correlators?time_index=${k}`, fetchJson, { keepPreviousData: true });
  const sites = siteNames.length;
  const lookUp = useMemo(() => pairLookUp(data, sites), [data, sites]);
  const value = useCallback((i: number, j: number) => lookUp.value[i * sites + j], [lookUp, sites]);
  const errorAt = useCallback((i: number, j: number) => lookUp.error[i * sites + j], [lookUp, sites]);
  if (error) return <p className="notice notice-error" role="alert">{error instanceof Error ? error.message : "The matrix could not be read."}</p>;
  return (
    <MatrixChart
      title="All pairs"
      caption={`at t = ${plainNumber(time_us, 6)} µs`}
      siteNames={siteNames}
      value={value}
      error={errorAt}
      limit={limit}
      largest={440}
      loading={isLoading}
    />
  );
}

function pairLookUp(answer: MatrixAnswer | undefined, sites: number) {
  const value: (number | null)[] = new Array<number | null>(sites * sites).fill(null);
  const error: (number | null)[] = new Array<number | null>(sites * sites).fill(null);
  answer?.pairs.forEach(([i, j], pair) => {
    value[i * sites + j] = value[j * sites + i] = answer.value[0][pair];
    error[i * sites + j] = error[j * sites + i] = answer.error[0][pair];
  });
  return { value, error };
}
