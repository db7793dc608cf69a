import { CorrelationMapMarks } from "@/components/charts/correlation-map-marks";
import { FrontChartMarks } from "@/components/charts/front-chart-marks";
import { HistogramMarks, type SiteHistogram } from "@/components/charts/histogram-marks";
import { colourLimit } from "@/components/charts/map-geometry";
import type { ChartTheme } from "@/components/charts/chart-theme";
import type { ChartSize } from "@/components/charts/plot-area";
import { TraceChartMarks } from "@/components/charts/trace-chart-marks";
import { fitCurves, mapCrossings, mapCurves, traceLine, traceMap, type TracesAnswer } from "@/components/stations/trace-view";
import type { FrontResult } from "@/lib/science/front/front-result";
import { FigureDocument } from "./figure-document";

export type FigureName = "map" | "traces" | "front" | "histograms";

export interface AnalysisFigureProps {
  name: FigureName;
  width_mm: number;
  theme: ChartTheme;
  runTitle: string;
  siteNames: string[];
  traces: TracesAnswer;
  front: FrontResult;
  histograms: SiteHistogram[];
  provenance: string[];
}

const WIDTH_AT_86_MM = 400;
const HISTOGRAM_COLUMNS = 4;
const HISTOGRAM_HEIGHT = 100;

/** One figure of an analysis, drawn by the same marks as the page; wider figures get more room, not larger text. */
export function AnalysisFigure(props: AnalysisFigureProps) {
  const width = Math.round((WIDTH_AT_86_MM * props.width_mm) / 86);
  const size = { width, height: figureHeight(props, width) };
  return (
    <FigureDocument
      size={size}
      width_mm={props.width_mm}
      theme={props.theme}
      title={`${props.runTitle}: ${TITLES[props.name]}`}
      description={describe(props)}
      provenance={props.provenance}
    >
      <FigureMarks {...props} size={size} />
    </FigureDocument>
  );
}

const TITLES: Record<FigureName, string> = {
  map: "connected correlators and front",
  traces: "traces",
  front: "distance against crossing time",
  histograms: "count histograms",
};

function FigureMarks({ name, size, theme, siteNames, traces, front, histograms }: AnalysisFigureProps & { size: ChartSize }) {
  switch (name) {
    case "map": {
      const map = traceMap(traces, siteNames);
      return (
        <CorrelationMapMarks
          data={map.data}
          size={size}
          theme={theme}
          limit={colourLimit(map.data.rows)}
          crossings={mapCrossings(front, map.traceOfRow)}
          curves={mapCurves(front)}
          cells="rectangles"
        />
      );
    }
    case "traces":
      return <TraceChartMarks lines={traces.labels.map((_, trace) => traceLine(traces, trace))} size={size} theme={theme} labelled />;
    case "front":
      return <FrontChartMarks points={front.points} curves={fitCurves(front)} size={size} theme={theme} />;
    case "histograms":
      return <HistogramGrid histograms={histograms} size={size} theme={theme} />;
  }
}

function HistogramGrid({ histograms, size, theme }: { histograms: SiteHistogram[]; size: ChartSize; theme: ChartTheme }) {
  const width = size.width / HISTOGRAM_COLUMNS;
  const lastCount = Math.max(1, ...histograms.map(({ firstBin, frequencies }) => firstBin + frequencies.length - 1));
  return histograms.map((histogram, q) => (
    <g key={histogram.site} transform={`translate(${(q % HISTOGRAM_COLUMNS) * width},${Math.floor(q / HISTOGRAM_COLUMNS) * HISTOGRAM_HEIGHT})`}>
      <HistogramMarks histogram={histogram} size={{ width: width - 6, height: HISTOGRAM_HEIGHT }} theme={theme} logarithmic={false} lastCount={lastCount} />
    </g>
  ));
}

function figureHeight({ name, histograms }: AnalysisFigureProps, width: number): number {
  if (name === "histograms") return Math.ceil(histograms.length / HISTOGRAM_COLUMNS) * HISTOGRAM_HEIGHT;
  return Math.round(Math.min(width * 0.75, 420));
}

function describe({ name, traces, front, histograms }: AnalysisFigureProps): string {
  if (name === "histograms") return `${histograms.length} histograms of photon counts, one a site, with thresholds.`;
  const window = `${traces.times_us.length} times from ${traces.times_us[0]} to ${traces.times_us[traces.times_us.length - 1]} µs`;
  return `${traces.labels.length} traces at ${window}. ${front.verdictSentence}`;
}
