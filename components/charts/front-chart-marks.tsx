import { area as areaShape, line as lineShape, scaleLinear } from "d3";
import { AxisBottom, AxisLeft, round } from "./axis";
import type { ChartTheme } from "./chart-theme";
import { plotArea, type ChartSize } from "./plot-area";

/** A crossing time at its distance. */
export interface FrontPoint {
  label: string;
  distance: number;
  time_us: number | null;
  error_us: number | null;
  low_us: number | null;
  high_us: number | null;
  status: string;
}

/** A fitted front with its 95 % band in time. */
export interface FrontFitCurve {
  name: "linear" | "power law";
  /** `[q]`, in units of the mean spacing. */
  distances: number[];
  /** `[q]`, µs */
  times_us: number[];
  low_us: (number | null)[];
  high_us: (number | null)[];
}

export interface FrontChartProps {
  points: FrontPoint[];
  curves: FrontFitCurve[];
  size: ChartSize;
  theme: ChartTheme;
  preview?: boolean;
}

/** Returns scales and area; time runs to the right as in the map, distance upwards. */
export function frontGeometry(points: FrontPoint[], curves: FrontFitCurve[], size: ChartSize) {
  const area = plotArea(size, { left: 34, right: 14, top: 26, bottom: 40 });
  const latest = Math.max(1e-9, ...points.flatMap((point) => [point.time_us ?? 0, point.high_us ?? 0]));
  const ends = curves.map((curve) => curve.times_us[curve.times_us.length - 1] ?? 0).filter((time) => time < 1.4 * latest);
  const farthest = Math.max(1, ...points.map((point) => point.distance));
  return {
    area,
    time: scaleLinear().domain([0, 1.04 * Math.max(latest, ...ends)]).range([area.left, area.right]),
    distance: scaleLinear().domain([0, farthest * 1.06]).range([area.bottom, area.top]),
  };
}

/** From here on the points are smaller, so that they stay apart. */
const MANY_POINTS = 30;

/** Distance against crossing time with both fits and their bands; unresolved points are hollow. */
export function FrontChartMarks({ points, curves, size, theme, preview = false }: FrontChartProps) {
  const geometry = frontGeometry(points, curves, size);
  const radius = points.length > MANY_POINTS ? 2.4 : 3.6;
  return (
    <>
      <AxisLeft scale={geometry.distance} area={geometry.area} label="distance (sites)" theme={theme} />
      <AxisBottom scale={geometry.time} area={geometry.area} label="crossing time τ (µs)" theme={theme} />
      {curves.map((curve) => (
        <CurveMarks key={curve.name} curve={curve} geometry={geometry} theme={theme} preview={preview} />
      ))}
      {points.map((point, p) => (
        <PointMark key={`${p} ${point.label}`} radius={radius} point={point} geometry={geometry} theme={theme} />
      ))}
    </>
  );
}

type Geometry = ReturnType<typeof frontGeometry>;

function CurveMarks({ curve, geometry, theme, preview }: { curve: FrontFitCurve; geometry: Geometry; theme: ChartTheme; preview: boolean }) {
  const { area, time, distance } = geometry;
  const rows = curve.distances.map((_, q) => q);
  const inside = (value: number | null) => value !== null && value >= 0 && value <= time.domain()[1];
  const clamp = (value: number | null) => Math.max(area.left, Math.min(area.right, time(value ?? 0)));
  const colour = curve.name === "power law" ? theme.front : theme.ink;
  const path = lineShape<number>()
    .defined((q) => inside(curve.times_us[q]))
    .x((q) => round(time(curve.times_us[q])))
    .y((q) => round(distance(curve.distances[q])));
  const band = areaShape<number>()
    .defined((q) => curve.low_us[q] !== null && curve.high_us[q] !== null)
    .x0((q) => round(clamp(curve.low_us[q])))
    .x1((q) => round(clamp(curve.high_us[q])))
    .y((q) => round(distance(curve.distances[q])));
  return (
    <g>
      <path d={band(rows) ?? ""} fill={colour} opacity={0.13} />
      <path d={path(rows) ?? ""} fill="none" stroke={colour} strokeWidth={curve.name === "power law" ? 2.2 : 1.4} strokeDasharray={preview ? "5 4" : undefined} />
    </g>
  );
}

function PointMark({ point, radius, geometry, theme }: { point: FrontPoint; radius: number; geometry: Geometry; theme: ChartTheme }) {
  if (point.time_us === null) return null;
  const { time, distance } = geometry;
  const y = round(distance(point.distance));
  const resolved = point.status === "resolved";
  return (
    <g stroke={theme.front} strokeWidth={radius > 3 ? 1.4 : 0.9}>
      {point.low_us !== null && point.high_us !== null && (
        <line x1={round(time(point.low_us))} x2={round(time(point.high_us))} y1={y} y2={y} opacity={resolved ? 1 : 0.5} />
      )}
      <circle cx={round(time(point.time_us))} cy={y} r={radius} fill={resolved ? theme.front : theme.paper} />
    </g>
  );
}
