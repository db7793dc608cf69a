import { double, int, mysqlEnum, mysqlTable, primaryKey } from "drizzle-orm/mysql-core";
import { id, mediumBlob } from "./columns";

/** Frequency by count of one site over all kept shots of a run version, or over its calibration shots. */
export const siteHistograms = mysqlTable(
  "site_histograms",
  {
    runId: id().notNull(),
    version: int().notNull(),
    role: mysqlEnum(["shots", "calibration-dark", "calibration-bright"]).notNull(),
    site: int().notNull(),
    /** Lower edge of the first bin; bins are one count wide. 0 for whole counts. */
    firstBin: double().notNull(),
    /** Little-endian Uint32Array `[bin]`. */
    data: mediumBlob().notNull(),
  },
  (table) => [primaryKey({ columns: [table.runId, table.version, table.role, table.site] })],
);
