import { area as areaShape, extent, line as lineShape, scaleLinear } from "d3";
import { AxisBottom, AxisLeft, round } from "./axis";
import type { ChartTheme } from "./chart-theme";
import { plotArea, type ChartSize } from "./plot-area";

/** One trace C(t) with its 95 % band. */
export interface TraceLine {
  label: string;
  times_us: number[];
  /** `[k]`; null where there is no number. */
  value: (number | null)[];
  low: (number | null)[];
  high: (number | null)[];
  /** `[k]`, the band that holds the whole trace; null or left out where it is not known. */
  bandLow?: (number | null)[] | null;
  bandHigh?: (number | null)[] | null;
  /** The crossing and the level it was read at. */
  crossing?: { time_us: number; low_us: number | null; high_us: number | null; level: number | null; resolved: boolean };
}

export interface TraceChartProps {
  lines: TraceLine[];
  size: ChartSize;
  theme: ChartTheme;
  preview?: boolean;
  /** Room at the right for direct labels; files with many traces use it. */
  labelled?: boolean;
}

/** Beyond this many, bands would hide each other. */
const MOST_BANDS = 4;
const LABEL_GAP_PX = 10;

/** Traces fade with their place in the list, so that near and far sites can be told apart. */
function lineOpacity(q: number, lines: number): number {
  return lines === 1 ? 1 : 1 - (0.72 * q) / (lines - 1);
}

/** Returns scales and area of a trace chart; all lines share one time axis. */
export function traceGeometry(lines: TraceLine[], size: ChartSize, labelled = false) {
  const area = plotArea(size, { left: 44, right: labelled ? 64 : 14, top: 26, bottom: 40 });
  const times = lines.flatMap((line) => line.times_us);
  const values = lines.flatMap((line) => [...line.low, ...line.high, ...line.value, ...(line.bandLow ?? []), ...(line.bandHigh ?? [])]).filter((value) => value !== null);
  const [first, last] = extent(times);
  const [lowest, highest] = extent(values);
  return {
    area,
    time: scaleLinear().domain([first ?? 0, last ?? 1]).range([area.left, area.right]),
    correlator: scaleLinear()
      .domain([Math.min(0, lowest ?? 0), Math.max(0.01, highest ?? 1)])
      .nice(5)
      .range([area.bottom, area.top]),
  };
}

/** Traces against time with their bands, zero as a hairline, level and crossing in the front's colour. */
export function TraceChartMarks({ lines, size, theme, preview = false, labelled = false }: TraceChartProps) {
  const { area, time, correlator } = traceGeometry(lines, size, labelled);
  return (
    <>
      <AxisLeft scale={correlator} area={area} label="connected correlator C" theme={theme} />
      <AxisBottom scale={time} area={area} label="evolution time (µs)" theme={theme} />
      <line x1={area.left} x2={area.right} y1={round(correlator(0))} y2={round(correlator(0))} stroke={theme.hairline} />
      {lines.map((line, q) => (
        <g key={line.label} opacity={lineOpacity(q, lines.length)}>
          {lines.length === 1 && line.bandLow && line.bandHigh && (
            <path d={bandPath(line.times_us, line.bandLow, line.bandHigh, time, correlator)} fill={theme.accent} opacity={0.09} />
          )}
          {lines.length <= MOST_BANDS && <path d={bandPath(line.times_us, line.low, line.high, time, correlator)} fill={theme.accent} opacity={0.18} />}
          <path d={valuePath(line, time, correlator)} fill="none" stroke={theme.accent} strokeWidth={1.6} strokeDasharray={preview ? "5 4" : undefined} />
          {lines.length === 1 &&
            line.value.map((value, k) =>
              value === null ? null : <circle key={line.times_us[k]} cx={round(time(line.times_us[k]))} cy={round(correlator(value))} r={2} fill={theme.accent} />,
            )}
          {lines.length === 1 && line.crossing && <CrossingMark line={line} geometry={{ area, time, correlator }} theme={theme} />}
        </g>
      ))}
      {labelled && <EndLabels lines={lines} geometry={{ area, time, correlator }} theme={theme} />}
    </>
  );
}

type Geometry = ReturnType<typeof traceGeometry>;

function valuePath(line: TraceLine, time: Geometry["time"], correlator: Geometry["correlator"]): string {
  const path = lineShape<number>()
    .defined((k) => line.value[k] !== null)
    .x((k) => round(time(line.times_us[k])))
    .y((k) => round(correlator(line.value[k] ?? 0)));
  return path(line.times_us.map((_, k) => k)) ?? "";
}

type Samples = (number | null)[];

function bandPath(times_us: number[], low: Samples, high: Samples, time: Geometry["time"], correlator: Geometry["correlator"]): string {
  const path = areaShape<number>()
    .defined((k) => low[k] !== null && high[k] !== null)
    .x((k) => round(time(times_us[k])))
    .y0((k) => round(correlator(low[k] ?? 0)))
    .y1((k) => round(correlator(high[k] ?? 0)));
  return path(times_us.map((_, k) => k)) ?? "";
}

function CrossingMark({ line, geometry, theme }: { line: TraceLine; geometry: Geometry; theme: ChartTheme }) {
  const { area, time, correlator } = geometry;
  if (!line.crossing || line.crossing.level === null) return null;
  const { time_us, low_us, high_us, level, resolved } = line.crossing;
  const y = round(correlator(level));
  return (
    <g>
      <line x1={area.left} x2={area.right} y1={y} y2={y} stroke={theme.front} strokeWidth={1} strokeDasharray="2 3" />
      {low_us !== null && high_us !== null && (
        <line x1={round(time(low_us))} x2={round(time(high_us))} y1={y} y2={y} stroke={theme.front} strokeWidth={3} />
      )}
      <line x1={round(time(time_us))} x2={round(time(time_us))} y1={y} y2={area.bottom} stroke={theme.front} strokeWidth={1} />
      <circle cx={round(time(time_us))} cy={y} r={4} fill={resolved ? theme.front : theme.paper} stroke={theme.front} strokeWidth={1.4} />
    </g>
  );
}

/** Direct labels at the right end, moved apart where they would overlap. */
function EndLabels({ lines, geometry, theme }: { lines: TraceLine[]; geometry: Geometry; theme: ChartTheme }) {
  const gap = Math.min(LABEL_GAP_PX, geometry.area.height / Math.max(1, lines.length));
  return (
    <g fontSize={Math.min(10, gap + 1)} fill={theme.muted}>
      {placeLabels(lines, geometry, gap).map(({ label, y }) => (
        <text key={label} x={geometry.area.right + 4} y={round(y)} dy="0.34em">
          {label}
        </text>
      ))}
    </g>
  );
}

/** Each label stands at its line's end, at least `gap` below the one above; all move up when the last would leave the plot. */
function placeLabels(lines: TraceLine[], geometry: Geometry, gap: number): { label: string; y: number }[] {
  const labels = lines
    .map((line) => ({ label: line.label, y: geometry.correlator(line.value.findLast((value) => value !== null) ?? 0) }))
    .sort((first, second) => first.y - second.y);
  for (let q = 1; q < labels.length; q++) labels[q].y = Math.max(labels[q].y, labels[q - 1].y + gap);
  const over = Math.max(0, (labels[labels.length - 1]?.y ?? 0) - geometry.area.bottom);
  return labels.map(({ label, y }) => ({ label, y: y - over }));
}
