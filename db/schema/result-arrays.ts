import { int, mysqlEnum, mysqlTable, primaryKey, varchar } from "drizzle-orm/mysql-core";
import { id, jsonText, mediumBlob } from "./columns";

/** A result of an analysis: a little-endian typed array with its shape, or UTF-8 JSON (`dtype` json). */
export const resultArrays = mysqlTable(
  "result_arrays",
  {
    analysisId: id().notNull(),
    name: varchar({ length: 60 }).notNull(),
    /** Arrays above 8 MiB are kept in parts. */
    part: int().notNull(),
    dtype: mysqlEnum(["float64", "float32", "uint8", "uint32", "json"]).notNull(),
    shape: jsonText<number[]>()().notNull(),
    data: mediumBlob().notNull(),
  },
  (table) => [primaryKey({ columns: [table.analysisId, table.name, table.part] })],
);
