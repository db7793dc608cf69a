"use client";

import { useMemo } from "react";
import { CorrelationMap } from "@/components/charts/correlation-map";
import { FrontChart } from "@/components/charts/front-chart";
import { ResidualsChart } from "@/components/charts/residuals-chart";
import { TraceChart } from "@/components/charts/trace-chart";
import { useUrlState } from "@/components/shell/use-url-state";
import { isNoFit, type FrontResult } from "@/lib/science/front/front-result";
import { ExportLinks } from "./export-links";
import { FitTable } from "./fit-table";
import { InfluenceTable } from "./influence-table";
import { fitCurves, mapCrossings, mapCurves, traceLine, traceMap, traceName, type TracesAnswer } from "./trace-view";
import { VerdictBlock } from "./verdict-block";
import { VelocityTable } from "./velocity-table";

interface FrontStationProps {
  analysisId: string;
  siteNames: string[];
  traces: TracesAnswer;
  front: FrontResult;
  /** What the comparison with a nearest-neighbour chain says; null until one has been made. */
  comparison: string | null;
}

/** The front of a saved analysis: the map with the front over it, distance against time, both fits, what did not resolve. */
export function FrontStation({ analysisId, siteNames, traces, front, comparison }: FrontStationProps) {
  const map = useMemo(() => traceMap(traces, siteNames), [traces, siteNames]);
  const crossings = useMemo(() => mapCrossings(front, map.traceOfRow), [front, map]);
  const curves = useMemo(() => fitCurves(front), [front]);
  const [chosen, choose] = useUrlState("trace", "0");
  const trace = Math.max(0, Math.min(traces.labels.length - 1, Number.parseInt(chosen, 10) || 0));
  return (
    <>
      <VerdictBlock front={front} comparison={comparison} />
      <div className="mt-5 grid grid-cols-1 gap-x-8 gap-y-6 lg:grid-cols-2 xl:grid-cols-[5fr_4fr_17rem]">
        <CorrelationMap
          title="Correlations and front"
          data={map.data}
          errors={map.errors}
          height={380}
          crossings={crossings}
          curves={mapCurves(front)}
          chosenRow={map.traceOfRow.indexOf(trace)}
          onPickRow={(row) => pick(map.traceOfRow[row], choose)}
          actions={<ExportLinks analysisId={analysisId} figure="map" data="traces" />}
        />
        <FrontChart
          title="Distance against crossing time"
          points={front.points}
          curves={curves}
          height={380}
          onPick={(index) => pick(index, choose)}
          actions={<ExportLinks analysisId={analysisId} figure="front" data="front" />}
        />
        <FitTable front={front} />
      </div>
      <div className="mt-7 grid grid-cols-1 gap-x-8 gap-y-6 lg:grid-cols-2 xl:grid-cols-4">
        <TraceChart
          title={`Trace of ${traceName(traces, trace, siteNames)}`}
          caption="pick a row or a point to see another"
          line={traceLine(traces, trace, front.points[trace])}
          errors={traces.error[trace]}
          height={250}
        />
        <ResidualsChart title="Residuals" caption="power law filled, straight line hollow" residuals={residualsOf(front)} height={250} />
        <VelocityTable front={front} />
        {front.influence.length > 0 && (
          <InfluenceTable front={front} nameOf={(label) => traceName(traces, traces.labels.indexOf(label), siteNames)} />
        )}
      </div>
      {front.unresolved.length > 0 && <UnresolvedList front={front} />}
    </>
  );
}

function pick(trace: number | null, choose: (value: string) => void): void {
  if (trace !== null) choose(String(trace));
}

function residualsOf(front: FrontResult) {
  const fitted = front.points.filter((point) => point.fitted);
  const residual = (fit: FrontResult["linear"] | FrontResult["powerLaw"], q: number) =>
    isNoFit(fit) || !fitted[q].error_us ? null : fit.residuals_us[q] / fitted[q].error_us;
  return fitted.map((point, q) => ({
    label: point.label,
    distance: point.distance,
    linear: residual(front.linear, q),
    powerLaw: residual(front.powerLaw, q),
  }));
}

function UnresolvedList({ front }: { front: FrontResult }) {
  return (
    <section className="mt-7">
      <h2 className="text-[1rem]">Traces that entered no fit</h2>
      <ul className="mt-1 columns-1 gap-8 text-muted sm:columns-2">
        {front.unresolved.map((trace) => (
          <li key={trace.label} className="break-inside-avoid">
            <span className="text-ink">{trace.label}</span>: {trace.reason}
          </li>
        ))}
      </ul>
    </section>
  );
}
