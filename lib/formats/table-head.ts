import { cellText, splitCells } from "@/lib/formats/cells";
import { decimalNumber } from "@/lib/formats/decimal-text";
import type { RowCursor } from "@/lib/formats/row-cursor";
import { invalidAt, type Problem } from "@/lib/problem";

const SEPARATORS = [44, 59, 9];
const LONGEST_ROW_CELLS = 4100;
/** Powers of ten from each unit to µs. */
const TIME_COLUMNS = new Map([["time_us", 0], ["time", 0], ["time_ms", 3], ["time_s", 6]]);

/** The first row of a delimited text, understood. */
export interface TableHead {
  separator: number;
  columns: string[];
  /** Column of the times and its power of ten to µs; null when there is none. */
  time: { column: number; tens: number } | null;
  /** Column of the shot numbers, −1 when there is none. */
  shot: number;
  /** All other columns, in order. */
  others: number[];
}

/** Reads the row under the cursor as the header; a Problem names what a header lacks. */
export function readTableHead(rows: RowCursor, filename: string): TableHead | Problem {
  const line = `${filename} line ${rows.line}`;
  const candidates = SEPARATORS.map((separator) => ({ separator, columns: rowTexts(rows, separator) }));
  const timed = candidates.find(({ columns }) => columns?.some((name) => TIME_COLUMNS.has(name.toLowerCase())));
  const widest = candidates.reduce((best, next) => ((next.columns?.length ?? 0) > (best.columns?.length ?? 0) ? next : best));
  const { separator, columns } = timed ?? widest;
  if (columns === null) return invalidAt(line, "a quote is opened and not closed, or there are too many columns");
  if (columns.every((name) => decimalNumber(name) !== null)) {
    return invalidAt(line, "numbers instead of names: the first line must be a header such as time_us,shot,site_0,site_1");
  }
  const unnamed = columns.indexOf("");
  if (unnamed >= 0) return invalidAt(`${filename} header`, `column ${unnamed + 1} has no name`);
  return arranged(separator, columns, filename);
}

/** Whether the columns are those of the form with one row a count: time, shot, site, count. */
export function isLongForm(head: TableHead): boolean {
  const names = head.others.map((column) => head.columns[column].toLowerCase());
  return head.time !== null && head.shot >= 0 && names.length === 2 && names.includes("site") && names.includes("count");
}

/** Whether there are columns named site and count: read as sites of one row a shot they would give numbers without sense. */
export function looksLikeLongForm(head: TableHead): boolean {
  const names = head.others.map((column) => head.columns[column].toLowerCase());
  return names.includes("site") && names.includes("count");
}

function arranged(separator: number, columns: string[], filename: string): TableHead | Problem {
  const names = columns.map((name) => name.toLowerCase());
  const times = names.flatMap((name, column) => (TIME_COLUMNS.has(name) ? [column] : []));
  if (times.length > 1) return invalidAt(`${filename} header`, `two time columns: ${times.map((column) => columns[column]).join(", ")}`);
  const shot = names.indexOf("shot");
  if (shot !== names.lastIndexOf("shot")) return invalidAt(`${filename} header`, "two columns named shot");
  const time = times.length === 0 ? null : { column: times[0], tens: TIME_COLUMNS.get(names[times[0]]) ?? 0 };
  const others = names.flatMap((_, column) => (column === shot || column === time?.column ? [] : [column]));
  return { separator, columns, time, shot, others };
}

function rowTexts(rows: RowCursor, separator: number): string[] | null {
  const bounds = new Int32Array(2 * LONGEST_ROW_CELLS);
  const cells = splitCells(rows.bytes, rows.start, rows.end, separator, bounds);
  if (cells < 0 || cells > LONGEST_ROW_CELLS) return null;
  return Array.from({ length: cells }, (_, cell) => cellText(rows.bytes, bounds[2 * cell], bounds[2 * cell + 1]));
}
