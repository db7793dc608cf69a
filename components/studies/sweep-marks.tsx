import { round } from "@/components/charts/axis";
import type { ChartTheme } from "@/components/charts/chart-theme";
import type { PlotArea } from "@/components/charts/plot-area";
import type { SweepOptionRow, SweepRow } from "./sweep-rows";

interface SweepMarksProps {
  rows: SweepRow[];
  /** β of the analysis' own choices. */
  baseline: number | null;
  area: PlotArea;
  beta: (value: number) => number;
  rowHeight: number;
  /** The row under the cursor. */
  shown: number | null;
  theme: ChartTheme;
}

/** Names at the left; a dot with its error a row, over ticks of all combinations; the analysis' own β as a line through all rows. */
export function SweepMarks({ rows, baseline, area, beta, rowHeight, shown, theme }: SweepMarksProps) {
  return (
    <>
      {baseline !== null && <line x1={round(beta(baseline))} x2={round(beta(baseline))} y1={area.top} y2={area.bottom} stroke={theme.ink} strokeDasharray="3 3" />}
      {rows.map((row, at) => {
        const y = area.top + (at + 0.5) * rowHeight;
        return (
          <g key={`${at} ${row.text}`}>
            {shown === at && <line x1={area.left} x2={area.right} y1={y} y2={y} stroke={theme.rule} />}
            <text x={row.kind === "choice" ? 0 : 10} y={y} dy="0.34em" fontSize={12} fill={row.kind === "choice" || at === 0 ? theme.ink : theme.muted} fontWeight={row.kind === "choice" || at === 0 ? 600 : 400}>
              {row.text}
            </text>
            {row.kind === "option" && <OptionMarks row={row} y={y} area={area} beta={beta} theme={theme} />}
          </g>
        );
      })}
    </>
  );
}

function OptionMarks({ row, y, area, beta, theme }: Pick<SweepMarksProps, "area" | "beta" | "theme"> & { row: SweepOptionRow; y: number }) {
  const inside = row.among.map(beta).filter((x) => x >= area.left && x <= area.right);
  const own = row.alone.beta;
  return (
    <>
      <path d={inside.map((x) => `M${round(x)},${round(y - 4)}v8`).join("")} stroke={theme.muted} strokeOpacity={0.28} />
      {own !== null && (
        <>
          <line x1={round(beta(own.value - own.error))} x2={round(beta(own.value + own.error))} y1={y} y2={y} stroke={theme.front} strokeWidth={1.4} />
          <circle cx={round(beta(own.value))} cy={y} r={3.4} fill={theme.front} />
        </>
      )}
    </>
  );
}
