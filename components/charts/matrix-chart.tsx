"use client";

import { scaleLinear } from "d3";
import { useCallback, useMemo, type ReactNode } from "react";
import { useThemeName } from "@/components/shell/use-theme-name";
import { withUncertainty } from "@/lib/number-text";
import { CellCanvas } from "./cell-canvas";
import { ChartFigure } from "./chart-figure";
import { divergingColour } from "./diverging-colours";
import { plotArea } from "./plot-area";
import { siteText } from "./site-text";
import { useCursor } from "./use-cursor";
import { useMeasuredWidth } from "./use-measured-width";

interface MatrixChartProps {
  title: string;
  caption?: ReactNode;
  siteNames: string[];
  /** C_ij at one time; null on the diagonal, which is a variance. */
  value: (i: number, j: number) => number | null;
  error: (i: number, j: number) => number | null;
  limit: number;
  largest: number;
  /** The numbers belong to another time still; the picture keeps its place, paler. */
  loading: boolean;
  actions?: ReactNode;
}

/** The full matrix C_ij at one time; the diagonal is left as ground. */
export function MatrixChart({ title, caption, siteNames, value, error, limit, largest, loading, actions }: MatrixChartProps) {
  const [container, width] = useMeasuredWidth<HTMLDivElement>(360);
  const themeName = useThemeName();
  const sites = siteNames.length;
  const side = Math.min(width, largest);
  const geometry = useMemo(() => matrixGeometry(side, sites, labelWidth(siteNames)), [side, sites, siteNames]);
  const colour = useCallback(
    (row: number, column: number) => (row === column ? null : divergingColour(themeName, value(row, column), limit)),
    [themeName, value, limit],
  );
  const { cursor, handlers } = useCursor({
    columns: sites,
    rows: sites,
    at: (x, y) => {
      const column = Math.floor(geometry.column.invert(x));
      const row = Math.floor(geometry.row.invert(y));
      return column < 0 || column >= sites || row < 0 || row >= sites ? null : { column, row };
    },
  });
  const everyRow = Math.max(1, Math.ceil(15 / (geometry.area.height / sites)));
  const roomForName = (i: number) => geometry.column(i + 0.5) + labelWidth(siteNames) / 2 <= side + 4;
  const everyColumn = Math.max(1, Math.ceil(labelWidth(siteNames) / (geometry.area.width / sites)));
  return (
    <ChartFigure
      title={title}
      caption={caption}
      actions={actions}
      readOut={
        cursor &&
        (cursor.row === cursor.column ? (
          `${siteText(siteNames[cursor.row])} with itself is a variance, not a correlation.`
        ) : (
          <>
            {siteText(siteNames[cursor.column])} and {siteText(siteNames[cursor.row])}:{" "}
            <strong className="text-ink">C = {withUncertainty(value(cursor.row, cursor.column), error(cursor.row, cursor.column))}</strong>
          </>
        ))
      }
      table={() => <MatrixTable siteNames={siteNames} value={value} error={error} />}
    >
      <div ref={container} aria-busy={loading} className={`transition-opacity ${loading ? "opacity-50" : ""}`} style={{ height: side }}>
        <div className="relative" style={{ width: side, height: side }}>
          <CellCanvas size={geometry.size} columnEdges={geometry.columnEdges} rowEdges={geometry.rowEdges} colour={colour} />
          <svg {...handlers} role="img" aria-label={`${title}: ${sites} by ${sites} sites. Arrow keys move the read-out.`} className="absolute inset-0 touch-pan-y" width={side} height={side}>
            <rect x={geometry.area.left} y={geometry.area.top} width={geometry.area.width} height={geometry.area.height} fill="none" stroke="var(--rule)" />
            <g fontSize={11} fill="var(--muted)" className="figures">
              {siteNames.map((name, i) => (
                <g key={name + i}>
                  {i % everyColumn === 0 && roomForName(i) && (
                    <text x={geometry.column(i + 0.5)} y={geometry.area.bottom + 14} textAnchor="middle">
                      {shortName(name)}
                    </text>
                  )}
                  {i % everyRow === 0 && (
                    <text x={geometry.area.left - 5} y={geometry.row(i + 0.5)} dy="0.34em" textAnchor="end">
                      {shortName(name)}
                    </text>
                  )}
                </g>
              ))}
            </g>
            {cursor && (
              <rect
                x={geometry.column(cursor.column)}
                y={geometry.row(cursor.row + 1)}
                width={geometry.area.width / sites}
                height={geometry.area.height / sites}
                fill="none"
                stroke="var(--ink)"
                strokeWidth={2}
              />
            )}
          </svg>
        </div>
      </div>
    </ChartFigure>
  );
}

/** Room for the longest site name, within reason; longer ones are cut. */
function labelWidth(siteNames: string[]): number {
  return Math.min(58, 12 + 6 * Math.max(...siteNames.map((name) => name.length)));
}

function shortName(name: string): string {
  return name.length > 7 ? `${name.slice(0, 6)}…` : name;
}

function matrixGeometry(side: number, sites: number, left: number) {
  const size = { width: side, height: side };
  const area = plotArea(size, { left, right: 8, top: 8, bottom: 30 });
  const column = scaleLinear().domain([0, sites]).range([area.left, area.right]);
  const row = scaleLinear().domain([0, sites]).range([area.bottom, area.top]);
  const borders = Array.from({ length: sites + 1 }, (_, i) => i);
  return { size, area, column, row, columnEdges: borders.map((i) => column(i)), rowEdges: borders.map((i) => row(i)) };
}

function MatrixTable({ siteNames, value, error }: Pick<MatrixChartProps, "siteNames" | "value" | "error">) {
  return (
    <table className="hairline-table figures text-sm">
      <thead>
        <tr>
          <th scope="col">site</th>
          {siteNames.map((name) => (
            <th key={name} scope="col" className="text-right">{name}</th>
          ))}
        </tr>
      </thead>
      <tbody>
        {siteNames.map((name, i) => (
          <tr key={name}>
            <th scope="row">{name}</th>
            {siteNames.map((other, j) => (
              <td key={other} className="text-right whitespace-nowrap">{i === j ? "" : withUncertainty(value(i, j), error(i, j))}</td>
            ))}
          </tr>
        ))}
      </tbody>
    </table>
  );
}
