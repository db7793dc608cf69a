import { scaleLinear } from "d3";
import { plotArea, type ChartSize, type Margins } from "./plot-area";

/** Rows of a correlation map from the foot upwards, each a trace over the same times. */
export interface MapRow {
  label: string;
  /** Null for the reference site's own row, which carries no correlation. */
  distance: number | null;
  /** `[k]`; null where there is no number. */
  values: (number | null)[] | null;
}

export interface MapData {
  /** What a row is: "site" or "distance". */
  rowName: string;
  rows: MapRow[];
  times_us: number[];
}

export interface MapGeometry {
  area: ReturnType<typeof plotArea>;
  time: ReturnType<typeof scaleLinear<number, number>>;
  /** `[k + 1]`, px: the borders between cells lie midway between times. */
  columnEdges: number[];
  /** `[row + 1]`, px, from the foot upwards. */
  rowEdges: number[];
  rowHeight: number;
  /** Middle of a row, px. */
  rowMiddle: (row: number) => number;
}

export const MAP_MARGINS: Margins = { left: 44, right: 58, top: 26, bottom: 40 };

/** Returns where a map's cells and axes lie. */
export function mapGeometry(data: MapData, size: ChartSize, margins: Margins = MAP_MARGINS): MapGeometry {
  const area = plotArea(size, margins);
  const borders = timeBorders(data.times_us);
  const time = scaleLinear()
    .domain([borders[0], borders[borders.length - 1]])
    .range([area.left, area.right]);
  const rowHeight = area.height / Math.max(1, data.rows.length);
  return {
    area,
    time,
    columnEdges: borders.map((border) => time(border)),
    rowEdges: Array.from({ length: data.rows.length + 1 }, (_, row) => area.bottom - row * rowHeight),
    rowHeight,
    rowMiddle: (row) => area.bottom - (row + 0.5) * rowHeight,
  };
}

/** Returns the `[k + 1]` borders around the times: midway between neighbours, half a step beyond the ends. */
export function timeBorders(times: number[]): number[] {
  if (times.length === 0) return [0, 1];
  if (times.length === 1) return [times[0] - 0.5, times[0] + 0.5];
  const last = times.length - 1;
  const inner = times.slice(1).map((time, k) => (time + times[k]) / 2);
  return [Math.max(0, times[0] - (inner[0] - times[0])), ...inner, times[last] + (times[last] - inner[last - 1])];
}

const QUIET_STEPS = [0.1, 0.12, 0.15, 0.2, 0.25, 0.3, 0.4, 0.5, 0.6, 0.8, 1];

/** Returns the largest |value| of a map, rounded up to a quiet number, so that the colour scale is symmetric about zero. */
export function colourLimit(rows: MapRow[]): number {
  let largest = 0;
  for (const row of rows) for (const value of row.values ?? []) largest = Math.max(largest, Math.abs(value ?? 0));
  if (largest === 0) return 1;
  const decade = 10 ** (Math.floor(Math.log10(largest)) + 1);
  const step = QUIET_STEPS.find((candidate) => largest <= candidate * decade * (1 + 1e-9)) ?? 1;
  return Number((step * decade).toPrecision(3));
}

/**
 * Returns one polyline (in px) a side of the reference row: the rows of growing distance, so that a front curve given
 * as distance against time can be laid over rows that are sites. Rows of equal or falling distance start a new side.
 */
export function distanceBranches(rows: MapRow[]): { row: number; distance: number }[][] {
  const reference = rows.findIndex((row) => row.distance === null);
  const upper = branch(rows, reference + 1, 1);
  const lower = reference > 0 ? branch(rows, reference - 1, -1) : [];
  return [upper, lower].filter((side) => side.length > 1);
}

function branch(rows: MapRow[], from: number, step: 1 | -1): { row: number; distance: number }[] {
  const side: { row: number; distance: number }[] = [];
  for (let row = from; row >= 0 && row < rows.length; row += step) {
    const distance = rows[row].distance;
    if (distance === null || (side.length > 0 && distance <= side[side.length - 1].distance)) return [];
    side.push({ row, distance });
  }
  return side;
}

/** Returns the row position (fractional) of a distance on one side, or null outside it. */
export function rowOfDistance(side: { row: number; distance: number }[], distance: number): number | null {
  for (let q = 1; q < side.length; q++) {
    const [a, b] = [side[q - 1], side[q]];
    if (distance >= a.distance && distance <= b.distance) {
      return a.row + ((b.row - a.row) * (distance - a.distance)) / (b.distance - a.distance);
    }
  }
  return null;
}
