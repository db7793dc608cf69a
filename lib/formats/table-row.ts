import { fitsCount } from "@/lib/formats/batch-builder";
import { cellText, splitCells, wholeNumberAt } from "@/lib/formats/cells";
import { decimalNumber, whyNotANumber } from "@/lib/formats/decimal-text";
import type { RowCursor } from "@/lib/formats/row-cursor";
import type { TableHead } from "@/lib/formats/table-head";
import { invalidAt, type Problem } from "@/lib/problem";

/** Reads the cells of one row after the other under a header; `rows` is the cursor that moves. */
export class TableRow {
  readonly head: TableHead;
  private readonly rows: RowCursor;
  private readonly filename: string;
  /** One cell more than columns, so that a long row is noticed. */
  private readonly bounds: Int32Array;
  private timeText: string | null = null;
  private time_us = NaN;

  constructor(rows: RowCursor, head: TableHead, filename: string) {
    this.rows = rows;
    this.head = head;
    this.filename = filename;
    this.bounds = new Int32Array(2 * head.columns.length);
  }

  /** Finds the cells of the current row; a Problem when their number is not that of the header. */
  split(): Problem | null {
    const { rows, head, bounds } = this;
    const cells = splitCells(rows.bytes, rows.start, rows.end, head.separator, bounds);
    if (cells === head.columns.length) return null;
    if (cells < 0) return invalidAt(this.line(), "a quote is opened and not closed");
    return invalidAt(this.line(), `${cells} cells instead of ${head.columns.length}`);
  }

  /** Returns the time in µs, 0 in a table without times, or the Problem of its cell. */
  time(): number | Problem {
    const { time } = this.head;
    if (time === null) return 0;
    const text = this.text(time.column);
    if (text === this.timeText) return this.time_us;
    const time_us = decimalNumber(text, time.tens);
    if (time_us === null) return this.refuse(time.column, whyNotANumber(text));
    if (time_us < 0) return this.refuse(time.column, `${text} is negative; an evolution time is 0 or more`);
    this.timeText = text;
    this.time_us = time_us;
    return time_us;
  }

  /** Returns the shot number, or the Problem of its cell. */
  shot(): number | Problem {
    const column = this.head.shot;
    const plain = this.wholeNumber(column);
    if (plain >= 0) return plain;
    const text = this.text(column);
    const shot = decimalNumber(text);
    if (shot === null) return this.refuse(column, whyNotANumber(text));
    if (!Number.isSafeInteger(shot) || shot < 0) return this.refuse(column, `${text} is no shot number; they are whole and not negative`);
    return shot;
  }

  /** Returns the count, NaN for a missing one (empty or NaN), or the Problem of its cell. */
  count(column: number): number | Problem {
    const plain = this.wholeNumber(column);
    return plain >= 0 ? plain : this.writtenCount(column);
  }

  /** Returns the plain whole number in a cell, or −1. */
  wholeNumber(column: number): number {
    return wholeNumberAt(this.rows.bytes, this.bounds[2 * column], this.bounds[2 * column + 1]);
  }

  /** Returns a cell's text, unquoted. */
  text(column: number): string {
    return cellText(this.rows.bytes, this.bounds[2 * column], this.bounds[2 * column + 1]);
  }

  /** Names the current line. */
  line(): string {
    return `${this.filename} line ${this.rows.line}`;
  }

  /** Names a cell of the current line. */
  place(column: number): string {
    return `${this.line()} column ${this.head.columns[column]}`;
  }

  private writtenCount(column: number): number | Problem {
    const text = this.text(column);
    if (text === "" || text.toLowerCase() === "nan") return NaN;
    const count = decimalNumber(text);
    if (count === null) return this.refuse(column, whyNotANumber(text));
    return fitsCount(count) ? count : this.refuse(column, `${text} is beyond what a count can be`);
  }

  private refuse(column: number, message: string): Problem {
    return invalidAt(this.place(column), message);
  }
}
