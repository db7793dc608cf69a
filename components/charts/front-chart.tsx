"use client";

import { leastIndex } from "d3";
import type { ReactNode } from "react";
import { useThemeName } from "@/components/shell/use-theme-name";
import { plainNumber, withUncertainty } from "@/lib/number-text";
import { ChartFigure } from "./chart-figure";
import { screenTheme } from "./chart-theme";
import { FrontChartMarks, frontGeometry, type FrontFitCurve, type FrontPoint } from "./front-chart-marks";
import { useCursor } from "./use-cursor";
import { useMeasuredWidth } from "./use-measured-width";

interface FrontChartProps {
  title: string;
  caption?: ReactNode;
  points: FrontPoint[];
  curves: FrontFitCurve[];
  height: number;
  preview?: boolean;
  actions?: ReactNode;
  /** What happens when a point is picked (its trace is shown). */
  onPick?: (index: number) => void;
}

/** Distance against crossing time with both fits; the cursor walks from point to point. */
export function FrontChart({ title, caption, points, curves, height, preview = false, actions, onPick }: FrontChartProps) {
  const [container, width] = useMeasuredWidth<HTMLDivElement>(480);
  const size = { width, height };
  const geometry = frontGeometry(points, curves, size);
  const { cursor, handlers } = useCursor(
    {
      columns: points.length,
      rows: 1,
      at: (x, y) => nearestPoint(points, geometry, x, y),
    },
    (picked) => onPick?.(picked.column),
  );
  const point = cursor ? points[cursor.column] : null;
  return (
    <ChartFigure
      title={title}
      caption={caption}
      actions={actions}
      hint={onPick && "Point, touch or use the arrow keys to read values; a click or Enter shows the trace."}
      readOut={point && <PointReadOut point={point} />}
      table={() => <PointTable points={points} />}
    >
      <div ref={container} style={{ height }}>
        <svg {...handlers} role="img" aria-label={`${title}: ${points.length} distances. Arrow keys move from point to point.`} width={width} height={height} className="touch-pan-y">
          <FrontChartMarks points={points} curves={curves} size={size} theme={screenTheme(useThemeName())} preview={preview} />
          {point && point.time_us !== null && (
            <circle cx={geometry.time(point.time_us)} cy={geometry.distance(point.distance)} r={7.5} fill="none" stroke="var(--ink)" strokeWidth={1.5} />
          )}
        </svg>
      </div>
    </ChartFigure>
  );
}

const REACH_PX = 40;

function nearestPoint(points: FrontPoint[], geometry: ReturnType<typeof frontGeometry>, x: number, y: number) {
  const away = (point: FrontPoint) =>
    point.time_us === null ? Infinity : Math.hypot(geometry.time(point.time_us) - x, geometry.distance(point.distance) - y);
  const nearest = leastIndex(points, (a, b) => away(a) - away(b)) ?? -1;
  return nearest < 0 || away(points[nearest]) > REACH_PX ? null : { column: nearest, row: 0 };
}

function PointReadOut({ point }: { point: FrontPoint }) {
  if (point.time_us === null) return `${point.label}, distance ${plainNumber(point.distance)}: ${point.status}`;
  return (
    <>
      {point.label}, distance {plainNumber(point.distance)}: <strong className="text-ink">τ = {withUncertainty(point.time_us, point.error_us)} µs</strong>
      {point.low_us !== null && `, 95 %: ${plainNumber(point.low_us)} … ${plainNumber(point.high_us)} µs`}
      {point.status !== "resolved" && ` (${point.status})`}
    </>
  );
}

function PointTable({ points }: { points: FrontPoint[] }) {
  return (
    <table className="hairline-table figures text-sm">
      <thead>
        <tr>
          <th scope="col">trace</th>
          <th scope="col">distance</th>
          <th scope="col">τ (µs)</th>
          <th scope="col">95 % interval (µs)</th>
          <th scope="col">status</th>
        </tr>
      </thead>
      <tbody>
        {points.map((point, p) => (
          <tr key={p}>
            <th scope="row">{point.label}</th>
            <td>{plainNumber(point.distance)}</td>
            <td>{withUncertainty(point.time_us, point.error_us)}</td>
            <td>
              {plainNumber(point.low_us)} … {plainNumber(point.high_us)}
            </td>
            <td>{point.status}</td>
          </tr>
        ))}
      </tbody>
    </table>
  );
}
