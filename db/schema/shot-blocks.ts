import { int, mysqlEnum, mysqlTable, primaryKey } from "drizzle-orm/mysql-core";
import { id, mediumBlob } from "./columns";

/** Calibration shots belong to no time; their blocks are kept under these slots. */
export const DARK_SLOT = -1;
export const BRIGHT_SLOT = -2;

/**
 * Kept shots of one evolution time, ordered by archive and shot number. Slots are numbered as times appear while reading;
 * `run_versions.time_slots` says which is which. `data` is deflated: shot numbers as float64 `[shot]`, then counts `[shot][site]`,
 * both little-endian.
 */
export const shotBlocks = mysqlTable(
  "shot_blocks",
  {
    runId: id().notNull(),
    version: int().notNull(),
    timeSlot: int().notNull(),
    seq: int().notNull(),
    shots: int().notNull(),
    countType: mysqlEnum(["uint16", "float32"]).notNull(),
    data: mediumBlob().notNull(),
  },
  (table) => [primaryKey({ columns: [table.runId, table.version, table.timeSlot, table.seq] })],
);
