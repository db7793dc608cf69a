"use client";

import { bisector } from "d3";
import { useCallback, useMemo, type ReactNode } from "react";
import { useThemeName } from "@/components/shell/use-theme-name";
import { plainNumber, withUncertainty } from "@/lib/number-text";
import { CellCanvas } from "./cell-canvas";
import { ChartFigure } from "./chart-figure";
import { screenTheme } from "./chart-theme";
import { CorrelationMapMarks } from "./correlation-map-marks";
import { divergingColour } from "./diverging-colours";
import type { FrontCurve, MapCrossing } from "./front-overlay";
import { colourLimit, mapGeometry, type MapData } from "./map-geometry";
import { siteText } from "./site-text";
import { useCursor, type Cursor } from "./use-cursor";
import { useMeasuredWidth } from "./use-measured-width";

interface CorrelationMapViewProps {
  title: string;
  caption?: ReactNode;
  data: MapData;
  /** `[row][k]`, standard errors for the read-out. */
  errors?: ((number | null)[] | null)[];
  /** `[row][k]`; cells that are false are left blank. */
  shown?: (boolean[] | null)[] | null;
  height: number;
  limit?: number;
  crossings?: MapCrossing[];
  curves?: FrontCurve[];
  preview?: boolean;
  actions?: ReactNode;
  /** The row drawn as chosen, and what happens when another is picked. */
  chosenRow?: number | null;
  onPickRow?: (row: number) => void;
}

const NO_CROSSINGS: MapCrossing[] = [];
const NO_CURVES: FrontCurve[] = [];

/** The correlation map on a page: canvas cells, marks above, one cursor for pointer and keys, and a table twin. */
export function CorrelationMap(props: CorrelationMapViewProps) {
  const { data, shown, height, crossings = NO_CROSSINGS, curves = NO_CURVES, preview = false } = props;
  const [container, width] = useMeasuredWidth<HTMLDivElement>(640);
  const themeName = useThemeName();
  const size = useMemo(() => ({ width, height }), [width, height]);
  const limit = props.limit ?? colourLimit(data.rows);
  const geometry = useMemo(() => mapGeometry(data, size), [data, size]);
  const colour = useCallback(
    (row: number, column: number) => (shown?.[row]?.[column] === false ? null : divergingColour(themeName, data.rows[row].values?.[column], limit)),
    [data, shown, themeName, limit],
  );
  const { cursor, handlers } = useCursor(
    {
      columns: data.times_us.length,
      rows: data.rows.length,
      at: (x, y) => cellAt(x, y, geometry),
      start: { column: 0, row: Math.max(0, data.rows.findIndex((row) => row.values !== null)) },
    },
    (picked) => props.onPickRow?.(picked.row),
  );
  return (
    <ChartFigure
      title={props.title}
      caption={props.caption}
      actions={props.actions}
      hint={props.onPickRow && "Point, touch or use the arrow keys to read values; a click or Enter picks the row."}
      readOut={cursor && readOut(props, cursor)}
      table={() => <MapTable data={data} errors={props.errors} />}
    >
      <div ref={container} className="relative" style={{ height }}>
        <CellCanvas size={size} columnEdges={geometry.columnEdges} rowEdges={geometry.rowEdges} colour={colour} />
        <svg
          {...handlers}
          role="img"
          aria-label={`${props.title}: ${data.rows.length} rows, ${data.times_us.length} times. Arrow keys move the read-out.`}
          className="absolute inset-0 touch-pan-y"
          width={width}
          height={height}
        >
          <CorrelationMapMarks
            data={data}
            size={size}
            theme={screenTheme(themeName)}
            limit={limit}
            crossings={crossings}
            curves={curves}
            preview={preview}
            cells="canvas"
          />
          {props.chosenRow !== null && props.chosenRow !== undefined && (
            <rect
              x={geometry.area.left}
              width={geometry.area.width}
              y={geometry.rowMiddle(props.chosenRow) - geometry.rowHeight / 2}
              height={geometry.rowHeight}
              fill="none"
              stroke="var(--ink)"
              strokeWidth={1.25}
            />
          )}
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

const edgeBisector = bisector((edge: number) => edge).right;

function cellAt(x: number, y: number, geometry: ReturnType<typeof mapGeometry>): Cursor | null {
  const column = edgeBisector(geometry.columnEdges, x) - 1;
  const row = Math.floor((geometry.area.bottom - y) / geometry.rowHeight);
  const rows = Math.round(geometry.area.height / geometry.rowHeight);
  if (column < 0 || column >= geometry.columnEdges.length - 1 || row < 0 || row >= rows) return null;
  return { column, row };
}

function readOut({ data, errors, shown }: CorrelationMapViewProps, cursor: Cursor): ReactNode {
  const row = data.rows[cursor.row];
  const time = plainNumber(data.times_us[cursor.column], 6);
  const name = data.rowName === "site" ? siteText(row.label) : `${data.rowName} ${row.label}`;
  if (!row.values) return `${name} is the reference itself; C with it is its variance and is not drawn.`;
  const value = withUncertainty(row.values[cursor.column], errors?.[cursor.row]?.[cursor.column]);
  const distance = row.distance === null || data.rowName === "distance" ? "" : `, distance ${plainNumber(row.distance)}`;
  return (
    <>
      {name}
      {distance}, t = {time} µs: <strong className="text-ink">C = {value}</strong>
      {shown?.[cursor.row]?.[cursor.column] === false && ", not significant"}
    </>
  );
}

function MapTable({ data, errors }: { data: MapData; errors: CorrelationMapViewProps["errors"] }) {
  return (
    <table className="hairline-table figures text-sm">
      <thead>
        <tr>
          <th scope="col">{data.rowName} \ t (µs)</th>
          {data.times_us.map((time) => (
            <th key={time} scope="col" className="text-right">
              {plainNumber(time, 6)}
            </th>
          ))}
        </tr>
      </thead>
      <tbody>
        {data.rows.map((row, r) => (
          <tr key={r}>
            <th scope="row">{row.label}</th>
            {data.times_us.map((time, k) => (
              <td key={time} className="text-right whitespace-nowrap">
                {row.values ? withUncertainty(row.values[k], errors?.[r]?.[k]) : "–"}
              </td>
            ))}
          </tr>
        ))}
      </tbody>
    </table>
  );
}
