import { plainNumber } from "@/lib/number-text";
import type { ChartTheme } from "./chart-theme";
import type { PlotArea } from "./plot-area";

interface ContinuousScale {
  (value: number): number;
  ticks: (count?: number) => number[];
}

interface AxisProps {
  scale: ContinuousScale;
  area: PlotArea;
  label: string;
  theme: ChartTheme;
  /** Wanted number of ticks; by default one in about 70 px. */
  ticks?: number;
  /** Draws hairlines across the plot. */
  grid?: boolean;
  format?: (value: number) => string;
  fontSize?: number;
}

const tickText = (value: number) => plainNumber(value, 6);

/** Horizontal axis at the foot of the plot, with its label below the ticks. */
export function AxisBottom({ scale, area, label, theme, ticks, grid = false, format = tickText, fontSize = 12 }: AxisProps) {
  const values = scale.ticks(ticks ?? Math.max(2, Math.round(area.width / 70)));
  return (
    <g fontSize={fontSize} fill={theme.muted} textAnchor="middle">
      <line x1={area.left} x2={area.right} y1={area.bottom} y2={area.bottom} stroke={theme.rule} />
      {values.map((value) => (
        <g key={value} transform={`translate(${round(scale(value))},0)`}>
          {grid && <line y1={area.top} y2={area.bottom} stroke={theme.hairline} />}
          <line y1={area.bottom} y2={area.bottom + 4} stroke={theme.rule} />
          <text y={area.bottom + 6 + fontSize} className="figures">
            {format(value)}
          </text>
        </g>
      ))}
      {label && (
        <text x={(area.left + area.right) / 2} y={area.bottom + 12 + 2 * fontSize} fill={theme.ink}>
          {label}
        </text>
      )}
    </g>
  );
}

/** Vertical axis at the left of the plot; its label stands upright above the axis, where it reads without turning the head. */
export function AxisLeft({ scale, area, label, theme, ticks, grid = false, format = tickText, fontSize = 12 }: AxisProps) {
  const values = scale.ticks(ticks ?? Math.max(2, Math.round(area.height / 45)));
  return (
    <g fontSize={fontSize} fill={theme.muted} textAnchor="end">
      <line x1={area.left} x2={area.left} y1={area.top} y2={area.bottom} stroke={theme.rule} />
      {values.map((value) => (
        <g key={value} transform={`translate(0,${round(scale(value))})`}>
          {grid && <line x1={area.left} x2={area.right} stroke={theme.hairline} />}
          <line x1={area.left - 4} x2={area.left} stroke={theme.rule} />
          <text x={area.left - 7} dy="0.34em" className="figures">
            {format(value)}
          </text>
        </g>
      ))}
      <text x={0} y={area.top - 9} fill={theme.ink} textAnchor="start">
        {label}
      </text>
    </g>
  );
}

/** Two decimals are far below a pixel and keep files small. */
export function round(value: number): number {
  return Math.round(value * 100) / 100;
}
