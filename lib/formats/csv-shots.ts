import { BatchBuilder } from "@/lib/formats/batch-builder";
import { plainStream } from "@/lib/formats/gunzip";
import { lineBlocks } from "@/lib/formats/line-blocks";
import { RowCursor } from "@/lib/formats/row-cursor";
import type { ReadOptions, ShotReader } from "@/lib/formats/shot-batch";
import { ShotNumberRegister } from "@/lib/formats/shot-number-register";
import { looksLikeLongForm, readTableHead } from "@/lib/formats/table-head";
import { TableRow } from "@/lib/formats/table-row";
import { invalidAt, isProblem, type Problem } from "@/lib/problem";

/** Reads delimited text with one row a shot, plain or gzipped, in constant memory. */
export const readCsvShots: ShotReader = async function* (source, options) {
  const rows = new RowCursor();
  let table: ShotTable | null = null;
  for await (const block of lineBlocks(plainStream(source, options.maxExpandedBytes))) {
    if (isProblem(block)) return block;
    rows.load(block);
    while (rows.advance()) {
      if (table === null) {
        const opened = openTable(rows, options);
        if (isProblem(opened)) return opened;
        table = opened;
        continue;
      }
      const trouble = table.takeRow();
      if (trouble !== null) return trouble;
    }
    if (table !== null) yield* table.builder.takeReady();
  }
  if (table === null) return invalidAt("file", "holds no table");
  const trouble = table.builder.finish();
  if (trouble !== null) return trouble;
  yield* table.builder.takeReady();
  return { format: "csv-shots", siteNames: table.siteNames, positions: null };
};

class ShotTable {
  readonly builder: BatchBuilder;
  readonly siteNames: string[];
  private readonly row: TableRow;
  private readonly register = new ShotNumberRegister();

  constructor(row: TableRow, options: ReadOptions) {
    const { others, columns } = row.head;
    this.row = row;
    this.siteNames = others.map((column) => columns[column]);
    this.builder = new BatchBuilder(options.role, others.length, (site) => row.place(others[site]));
  }

  takeRow(): Problem | null {
    const { row, builder } = this;
    const trouble = row.split();
    if (trouble !== null) return trouble;
    const time_us = row.time();
    if (isProblem(time_us)) return time_us;
    const shot = this.shotNumber(time_us);
    if (isProblem(shot)) return shot;
    const { others } = row.head;
    for (let i = 0; i < others.length; i++) {
      const count = row.count(others[i]);
      if (typeof count !== "number") return count;
      builder.row[i] = count;
    }
    builder.push(time_us, shot);
    return null;
  }

  private shotNumber(time_us: number): number | Problem {
    if (this.row.head.shot < 0) return this.register.addNext(time_us);
    const shot = this.row.shot();
    if (isProblem(shot) || this.register.add(time_us, shot)) return shot;
    return invalidAt(this.row.line(), `shot ${shot} is there twice at ${time_us} µs`);
  }
}

function openTable(rows: RowCursor, options: ReadOptions): ShotTable | Problem {
  const head = readTableHead(rows, options.filename);
  if (isProblem(head)) return head;
  const header = `${options.filename} header`;
  if (looksLikeLongForm(head)) return invalidAt(header, "columns site and count are those of one row a count, which needs time_us, shot, site, count and no other");
  if (head.time === null && options.role === "shots") {
    return invalidAt(header, "no time column; name it time_us, time_ms, time_s or time (µs)");
  }
  if (head.others.length === 0) return invalidAt(header, "no column of counts");
  return new ShotTable(new TableRow(rows, head, options.filename), options);
}
