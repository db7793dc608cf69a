import { mysqlEnum, mysqlTable, primaryKey, varchar } from "drizzle-orm/mysql-core";
import { id, jsonText, longBlob } from "./columns";

/** A result of an analysis: a little-endian typed array with its shape, or UTF-8 JSON (`dtype` json). */
export const resultArrays = mysqlTable(
  "result_arrays",
  {
    analysisId: id().notNull(),
    name: varchar({ length: 60 }).notNull(),
    dtype: mysqlEnum(["float64", "float32", "uint8", "uint32", "json"]).notNull(),
    shape: jsonText<number[]>()().notNull(),
    data: longBlob().notNull(),
  },
  (table) => [primaryKey({ columns: [table.analysisId, table.name] })],
);
