import { round } from "./axis";
import type { ChartTheme } from "./chart-theme";
import { distanceBranches, rowOfDistance, type MapData, type MapGeometry } from "./map-geometry";

/** A crossing to mark on the map. */
export interface MapCrossing {
  row: number;
  time_us: number | null;
  low_us: number | null;
  high_us: number | null;
  resolved: boolean;
}

/** A fitted front as distance against time. */
export interface FrontCurve {
  name: "linear" | "power law";
  distances: number[];
  times_us: number[];
}

interface FrontOverlayProps {
  data: MapData;
  geometry: MapGeometry;
  theme: ChartTheme;
  crossings: MapCrossing[];
  curves: FrontCurve[];
  preview: boolean;
}

/** Crossing times with intervals and the fitted fronts over a map; a casing in the ground's colour keeps them apart from the cells. */
export function FrontOverlay({ data, geometry, theme, crossings, curves, preview }: FrontOverlayProps) {
  const sides = distanceBranches(data.rows);
  const inWindow = (time: number) => time >= geometry.time.domain()[0] && time <= geometry.time.domain()[1];
  return (
    <g fill="none">
      {curves.flatMap((curve) =>
        sides.map((side, s) => {
          const path = curvePath(curve, side, geometry, inWindow);
          const colour = curve.name === "power law" ? theme.front : theme.ink;
          return (
            <g key={`${curve.name} ${s}`}>
              <path d={path} stroke={theme.paper} strokeWidth={4.5} opacity={0.85} />
              <path d={path} stroke={colour} strokeWidth={curve.name === "power law" ? 2.2 : 1.4} strokeDasharray={preview ? "5 4" : undefined} />
            </g>
          );
        }),
      )}
      {crossings.map((crossing) => (
        <CrossingMark key={crossing.row} crossing={crossing} geometry={geometry} theme={theme} />
      ))}
    </g>
  );
}

function CrossingMark({ crossing, geometry, theme }: { crossing: MapCrossing; geometry: MapGeometry; theme: ChartTheme }) {
  if (crossing.time_us === null) return null;
  const y = round(geometry.rowMiddle(crossing.row));
  const x = round(geometry.time(crossing.time_us));
  const radius = Math.min(4.2, Math.max(2, geometry.rowHeight * 0.3));
  const spread = Math.min(1.6, Math.max(0.7, geometry.rowHeight * 0.13));
  const [low, high] = [crossing.low_us, crossing.high_us];
  return (
    <g>
      {low !== null && high !== null && high > low && (
        <>
          <line x1={round(geometry.time(low))} x2={round(geometry.time(high))} y1={y} y2={y} stroke={theme.paper} strokeWidth={2.5 * spread} opacity={0.85} />
          <line x1={round(geometry.time(low))} x2={round(geometry.time(high))} y1={y} y2={y} stroke={theme.front} strokeWidth={round(spread)} />
        </>
      )}
      <circle cx={x} cy={y} r={radius} fill={crossing.resolved ? theme.front : theme.paper} stroke={crossing.resolved ? theme.paper : theme.front} strokeWidth={Math.min(1.4, radius * 0.4)} />
    </g>
  );
}

function curvePath(
  curve: FrontCurve,
  side: { row: number; distance: number }[],
  geometry: MapGeometry,
  inWindow: (time: number) => boolean,
): string {
  const points: string[] = [];
  curve.distances.forEach((distance, q) => {
    const row = rowOfDistance(side, distance);
    const time = curve.times_us[q];
    if (row !== null && inWindow(time)) points.push(`${round(geometry.time(time))},${round(geometry.rowMiddle(row))}`);
  });
  return points.length > 1 ? `M${points.join("L")}` : "";
}
