"use client";

import { bisector } from "d3";
import type { ReactNode } from "react";
import { useThemeName } from "@/components/shell/use-theme-name";
import { plainNumber, withUncertainty } from "@/lib/number-text";
import { ChartFigure } from "./chart-figure";
import { screenTheme } from "./chart-theme";
import { TraceChartMarks, traceGeometry, type TraceLine } from "./trace-chart-marks";
import { useCursor } from "./use-cursor";
import { useMeasuredWidth } from "./use-measured-width";

interface TraceChartProps {
  title: string;
  caption?: ReactNode;
  line: TraceLine;
  /** `[k]`, standard errors for the read-out. */
  errors: (number | null)[];
  height: number;
  preview?: boolean;
  actions?: ReactNode;
}

const nearestTime = bisector((time: number) => time).center;

/** One trace with its band, level and crossing, readable point by point. */
export function TraceChart({ title, caption, line, errors, height, preview = false, actions }: TraceChartProps) {
  const [container, width] = useMeasuredWidth<HTMLDivElement>(480);
  const size = { width, height };
  const geometry = traceGeometry([line], size);
  const { cursor, handlers } = useCursor({
    columns: line.times_us.length,
    rows: 1,
    at: (x) => ({ column: nearestTime(line.times_us, geometry.time.invert(x)), row: 0 }),
  });
  const k = cursor?.column ?? null;
  return (
    <ChartFigure
      title={title}
      caption={caption}
      actions={actions}
      readOut={k === null ? null : <TraceReadOut line={line} errors={errors} k={k} />}
      table={() => <TraceTable line={line} errors={errors} />}
    >
      <div ref={container} style={{ height }}>
        <svg {...handlers} role="img" aria-label={`${title}: ${line.label} against time, ${line.times_us.length} times. Arrow keys move the read-out.`} width={width} height={height} className="touch-pan-y">
          <TraceChartMarks lines={[line]} size={size} theme={screenTheme(useThemeName())} preview={preview} />
          {k !== null && (
            <line
              x1={geometry.time(line.times_us[k])}
              x2={geometry.time(line.times_us[k])}
              y1={geometry.area.top}
              y2={geometry.area.bottom}
              stroke="var(--ink)"
              strokeWidth={1}
            />
          )}
        </svg>
      </div>
    </ChartFigure>
  );
}

function TraceReadOut({ line, errors, k }: { line: TraceLine; errors: (number | null)[]; k: number }) {
  return (
    <>
      {line.label}, t = {plainNumber(line.times_us[k], 6)} µs: <strong className="text-ink">C = {withUncertainty(line.value[k], errors[k])}</strong>, 95 %: {plainNumber(line.low[k], 3)} … {plainNumber(line.high[k], 3)}
    </>
  );
}

function TraceTable({ line, errors }: { line: TraceLine; errors: (number | null)[] }) {
  return (
    <table className="hairline-table figures text-sm">
      <thead>
        <tr>
          <th scope="col">t (µs)</th>
          <th scope="col">C</th>
          <th scope="col">95 % interval</th>
        </tr>
      </thead>
      <tbody>
        {line.times_us.map((time, k) => (
          <tr key={time}>
            <th scope="row">{plainNumber(time, 6)}</th>
            <td>{withUncertainty(line.value[k], errors[k])}</td>
            <td>
              {plainNumber(line.low[k], 3)} … {plainNumber(line.high[k], 3)}
            </td>
          </tr>
        ))}
      </tbody>
    </table>
  );
}
