"use client";

import { scaleLinear } from "d3";
import type { ReactNode } from "react";
import { AxisBottom } from "@/components/charts/axis";
import { ChartFigure } from "@/components/charts/chart-figure";
import { screenTheme } from "@/components/charts/chart-theme";
import { plotArea } from "@/components/charts/plot-area";
import { useCursor } from "@/components/charts/use-cursor";
import { useMeasuredWidth } from "@/components/charts/use-measured-width";
import { useThemeName } from "@/components/shell/use-theme-name";
import { plainNumber, withUncertainty } from "@/lib/number-text";
import type { SweepCombination, SweepResult } from "@/lib/science/studies/sweep-result";
import { SweepMarks } from "./sweep-marks";
import { sweepDomain, sweepRows, type SweepRow } from "./sweep-rows";

const ROW = 18;
const NAMES = 148;

/** β of every single change with its error over the β of all combinations that make it, against the analysis' own. */
export function SweepChart({ sweep, actions }: { sweep: SweepResult; actions?: ReactNode }) {
  const [container, width] = useMeasuredWidth<HTMLDivElement>(480);
  const theme = screenTheme(useThemeName());
  const rows = sweepRows(sweep);
  const height = rows.length * ROW + 46;
  const area = plotArea({ width, height }, { left: NAMES, right: 12, top: 4, bottom: 42 });
  const beta = scaleLinear().domain(sweepDomain(rows, sweep)).range([area.left, area.right]);
  const [low, high] = beta.domain();
  const outside = sweep.combinations.filter((combination) => combination.beta !== null && (combination.beta.value < low || combination.beta.value > high)).length;
  const last = rows.length - 1;
  const { cursor, handlers } = useCursor({
    columns: 1,
    rows: rows.length,
    at: (_, y) => ({ column: 0, row: Math.max(0, Math.min(last, last - Math.floor((y - area.top) / ROW))) }),
    start: { column: 0, row: last },
  });
  const shown = cursor ? last - cursor.row : null;
  return (
    <ChartFigure
      title="β by choice"
      caption={`large: this choice alone, with its error; small: together with others${outside > 0 ? `; ${outside} outside` : ""}`}
      readOut={shown === null ? null : readOut(rows[shown])}
      actions={actions}
      table={() => <SweepTable rows={rows} />}
    >
      <div ref={container} style={{ height }}>
        <svg {...handlers} role="img" aria-label={`β for ${sweep.combinations.length} combinations of choices. Arrow keys up and down move from choice to choice.`} width={width} height={height} className="touch-pan-y">
          <AxisBottom scale={beta} area={area} label="β" theme={theme} />
          <SweepMarks rows={rows} baseline={sweep.baseline.beta?.value ?? null} area={area} beta={beta} rowHeight={ROW} shown={shown} theme={theme} />
        </svg>
      </div>
    </ChartFigure>
  );
}

function readOut(row: SweepRow): string {
  return row.kind === "choice" ? row.text : `${row.text}: ${numbersText(row.alone)}`;
}

function numbersText({ beta, gamma, v_sites_per_ms, points, reason }: SweepCombination): string {
  if (reason !== null) return reason;
  return `β = ${withUncertainty(beta?.value, beta?.error)}, γ = ${withUncertainty(gamma?.value, gamma?.error)}, v = ${withUncertainty(v_sites_per_ms?.value, v_sites_per_ms?.error)} sites/ms, ${points} points`;
}

function SweepTable({ rows }: { rows: SweepRow[] }) {
  return (
    <table className="hairline-table figures text-sm">
      <thead>
        <tr>
          {["choice", "β", "γ", "v (sites/ms)", "points"].map((name) => (
            <th key={name} scope="col">
              {name}
            </th>
          ))}
        </tr>
      </thead>
      <tbody>
        {rows.map((row) =>
          row.kind === "choice" ? (
            <tr key={row.text}>
              <th scope="rowgroup" colSpan={5}>
                {row.text}
              </th>
            </tr>
          ) : (
            <tr key={row.text}>
              <th scope="row" className="pl-3">
                {row.text}
              </th>
              <td>{withUncertainty(row.alone.beta?.value, row.alone.beta?.error)}</td>
              <td>{withUncertainty(row.alone.gamma?.value, row.alone.gamma?.error)}</td>
              <td>{withUncertainty(row.alone.v_sites_per_ms?.value, row.alone.v_sites_per_ms?.error)}</td>
              <td>{plainNumber(row.alone.points)}</td>
            </tr>
          ),
        )}
      </tbody>
    </table>
  );
}
