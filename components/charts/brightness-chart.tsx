"use client";

import { interpolateLab } from "d3";
import { useCallback, useMemo, type ReactNode } from "react";
import type { ThemeName } from "@/components/shell/theme-choice";
import { useThemeName } from "@/components/shell/use-theme-name";
import { groupedCount, plainNumber } from "@/lib/number-text";
import { AxisBottom } from "./axis";
import { CellCanvas } from "./cell-canvas";
import { ChartFigure } from "./chart-figure";
import { screenTheme } from "./chart-theme";
import { mapGeometry } from "./map-geometry";
import { siteText } from "./site-text";
import { useCursor } from "./use-cursor";
import { useMeasuredWidth } from "./use-measured-width";

interface BrightnessChartProps {
  title: string;
  caption?: ReactNode;
  siteNames: string[];
  times_us: number[];
  /** `[k][site]`, mean count of the kept shots. */
  brightness: number[][];
  /** `[k]`, kept shots. */
  shotsPerTime: number[];
  height: number;
}

const GROUND: Record<ThemeName, [string, string]> = {
  paper: ["#f8f3e7", "#7a3600"],
  night: ["#141d31", "#ffc98a"],
};

/** Mean count of every site at every time: a drifting detector or a dark site shows as a stripe. */
export function BrightnessChart({ title, caption, siteNames, times_us, brightness, shotsPerTime, height }: BrightnessChartProps) {
  const [container, width] = useMeasuredWidth<HTMLDivElement>(640);
  const themeName = useThemeName();
  const size = useMemo(() => ({ width, height }), [width, height]);
  const data = useMemo(
    () => ({ rowName: "site", times_us, rows: siteNames.map((label) => ({ label, distance: null, values: null })) }),
    [siteNames, times_us],
  );
  const geometry = useMemo(() => mapGeometry(data, size), [data, size]);
  const largest = Math.max(1e-9, ...brightness.flat());
  const colour = useCallback(
    (site: number, k: number) => interpolateLab(...GROUND[themeName])(Math.max(0, brightness[k][site] / largest)),
    [brightness, largest, themeName],
  );
  const { cursor, handlers } = useCursor({
    columns: times_us.length,
    rows: siteNames.length,
    at: (x, y) => {
      const column = geometry.columnEdges.findIndex((edge, k) => x >= edge && x < geometry.columnEdges[k + 1]);
      const row = Math.floor((geometry.area.bottom - y) / geometry.rowHeight);
      return column < 0 || row < 0 || row >= siteNames.length ? null : { column, row };
    },
  });
  const every = Math.max(1, Math.ceil(15 / geometry.rowHeight));
  const theme = screenTheme(themeName);
  return (
    <ChartFigure
      title={title}
      caption={caption}
      readOut={
        cursor && (
          <>
            {siteText(siteNames[cursor.row])}, t = {plainNumber(times_us[cursor.column], 6)} µs: <strong className="text-ink">{plainNumber(brightness[cursor.column][cursor.row])} counts a shot</strong>, {groupedCount(shotsPerTime[cursor.column])} shots kept
          </>
        )
      }
      table={() => <BrightnessTable siteNames={siteNames} times_us={times_us} brightness={brightness} shotsPerTime={shotsPerTime} />}
    >
      <div ref={container} className="relative" style={{ height }}>
        <CellCanvas size={size} columnEdges={geometry.columnEdges} rowEdges={geometry.rowEdges} colour={colour} />
        <svg {...handlers} role="img" aria-label={`${title}: ${siteNames.length} sites, ${times_us.length} times. Arrow keys move the read-out.`} className="absolute inset-0 touch-pan-y" width={width} height={height}>
          <AxisBottom scale={geometry.time} area={geometry.area} label="evolution time (µs)" theme={theme} />
          <g fontSize={12} fill={theme.muted} textAnchor="end">
            {siteNames.map((name, site) =>
              site % every === 0 ? (
                <text key={name + site} x={geometry.area.left - 7} y={geometry.rowMiddle(site)} dy="0.34em" className="figures">
                  {name.length > 7 ? `${name.slice(0, 6)}…` : name}
                </text>
              ) : null,
            )}
            <text x={0} y={geometry.area.top - 9} textAnchor="start" fill={theme.ink}>
              site
            </text>
          </g>
          <text x={geometry.area.right + 8} y={geometry.area.top + 8} fontSize={12} fill={theme.muted} className="figures">
            max {plainNumber(largest, 3)}
          </text>
          {cursor && (
            <rect
              x={geometry.columnEdges[cursor.column]}
              width={geometry.columnEdges[cursor.column + 1] - geometry.columnEdges[cursor.column]}
              y={geometry.rowMiddle(cursor.row) - geometry.rowHeight / 2}
              height={geometry.rowHeight}
              fill="none"
              stroke="var(--ink)"
              strokeWidth={2}
            />
          )}
        </svg>
      </div>
    </ChartFigure>
  );
}

function BrightnessTable({ siteNames, times_us, brightness, shotsPerTime }: Pick<BrightnessChartProps, "siteNames" | "times_us" | "brightness" | "shotsPerTime">) {
  return (
    <table className="hairline-table figures text-sm">
      <thead>
        <tr>
          <th scope="col">t (µs)</th>
          <th scope="col">shots</th>
          {siteNames.map((name, site) => (
            <th key={name + site} scope="col" className="text-right">{name}</th>
          ))}
        </tr>
      </thead>
      <tbody>
        {times_us.map((time, k) => (
          <tr key={time}>
            <th scope="row">{plainNumber(time, 6)}</th>
            <td>{groupedCount(shotsPerTime[k])}</td>
            {brightness[k].map((value, site) => (
              <td key={siteNames[site] + site} className="text-right">{plainNumber(value, 3)}</td>
            ))}
          </tr>
        ))}
      </tbody>
    </table>
  );
}
