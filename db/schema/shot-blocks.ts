import { int, mysqlEnum, mysqlTable, primaryKey } from "drizzle-orm/mysql-core";
import { id, mediumBlob } from "./columns";

/**
 * Kept shots of one evolution time (or one calibration role, timeIndex −1 dark, −2 bright), ordered by archive and shot
 * number. `data` is a deflated little-endian typed array `[shot][site]`.
 */
export const shotBlocks = mysqlTable(
  "shot_blocks",
  {
    runId: id().notNull(),
    version: int().notNull(),
    timeIndex: int().notNull(),
    seq: int().notNull(),
    shots: int().notNull(),
    countType: mysqlEnum(["uint16", "float32"]).notNull(),
    data: mediumBlob().notNull(),
  },
  (table) => [primaryKey({ columns: [table.runId, table.version, table.timeIndex, table.seq] })],
);
