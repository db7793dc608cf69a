import { decimalNumber } from "@/lib/formats/decimal-text";
import { plainStream } from "@/lib/formats/gunzip";
import { lineBlocks } from "@/lib/formats/line-blocks";
import { RowCursor } from "@/lib/formats/row-cursor";
import type { ByteSource, ReadOptions } from "@/lib/formats/shot-batch";
import { isLongForm, readTableHead } from "@/lib/formats/table-head";
import { TableRow } from "@/lib/formats/table-row";
import { invalidAt, isProblem, type Problem } from "@/lib/problem";

/** One count of a table with one row a count; the reader reuses one object for all rows. */
export interface CountRow {
  time_us: number;
  shot: number;
  /** The site's name; whole numbers in plain digits. */
  site: string | number;
  count: number;
  /** Names the line, and the cell of the count. */
  line: () => string;
  countPlace: () => string;
}

/**
 * Walks a table with one row a count, handing each row to `take` and pausing (a null) after each block of lines. The
 * Problem of a row, or the one `take` returns, is the last item.
 */
export async function* walkCountRows(
  source: ByteSource,
  options: ReadOptions,
  take: (row: CountRow) => Problem | null,
): AsyncGenerator<Problem | null> {
  const rows = new RowCursor();
  let reader: CountRowReader | null = null;
  for await (const block of lineBlocks(plainStream(source, options.maxExpandedBytes))) {
    if (isProblem(block)) {
      yield block;
      return;
    }
    rows.load(block);
    while (rows.advance()) {
      if (reader === null) {
        const opened = openReader(rows, options);
        if (isProblem(opened)) {
          yield opened;
          return;
        }
        reader = opened;
        continue;
      }
      const trouble: Problem | null = reader.read() ?? take(reader.row);
      if (trouble !== null) {
        yield trouble;
        return;
      }
    }
    yield null;
  }
}

class CountRowReader {
  readonly row: CountRow;
  private readonly cells: TableRow;
  private readonly site: number;
  private readonly countColumn: number;

  constructor(cells: TableRow) {
    const names = cells.head.columns.map((name) => name.toLowerCase());
    this.cells = cells;
    this.site = names.indexOf("site");
    this.countColumn = names.indexOf("count");
    const countPlace = (): string => cells.place(this.countColumn);
    this.row = { time_us: 0, shot: 0, site: 0, count: 0, line: () => cells.line(), countPlace };
  }

  read(): Problem | null {
    const { cells, row } = this;
    const trouble = cells.split();
    if (trouble !== null) return trouble;
    const time_us = cells.time();
    if (typeof time_us !== "number") return time_us;
    const shot = cells.shot();
    if (typeof shot !== "number") return shot;
    const count = cells.count(this.countColumn);
    if (typeof count !== "number") return count;
    row.site = this.siteInRow();
    if (row.site === "") return invalidAt(cells.place(this.site), "no site is named");
    row.time_us = time_us;
    row.shot = shot;
    row.count = count;
    return null;
  }

  private siteInRow(): string | number {
    const plain = this.cells.wholeNumber(this.site);
    return plain >= 0 ? plain : sameSite(this.cells.text(this.site));
  }
}

/** Gives 1, "1" and 1.0 the same whole number, so that one site written in several ways stays one. */
function sameSite(text: string): string | number {
  const number = decimalNumber(text);
  return number !== null && Number.isSafeInteger(number) ? number : text;
}

function openReader(rows: RowCursor, options: ReadOptions): CountRowReader | Problem {
  const head = readTableHead(rows, options.filename);
  if (isProblem(head)) return head;
  if (isLongForm(head)) return new CountRowReader(new TableRow(rows, head, options.filename));
  return invalidAt(`${options.filename} header`, "the columns must be time_us, shot, site, count");
}
