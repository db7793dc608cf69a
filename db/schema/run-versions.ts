import { int, mysqlEnum, mysqlTable, primaryKey } from "drizzle-orm/mysql-core";
import { id, jsonText, moment } from "./columns";
import { runs } from "./runs";

export interface VersionArchive {
  archiveId: string;
  filename: string;
  sha256: string;
  role: "shots" | "calibration-dark" | "calibration-bright";
  format: string;
}

/** How a site's brightness differs between the earlier and the later half of the shots of each time, over all times. */
export interface SiteDrift {
  /** (later − earlier) / mean of both. */
  change: number;
  /** The difference in units of its standard error. */
  significance: number;
}

/** What one reading of a run's archives gave; never changed afterwards. */
export const runVersions = mysqlTable(
  "run_versions",
  {
    runId: id().notNull().references(() => runs.id),
    number: int().notNull(),
    groupId: id().notNull(),
    archives: jsonText<VersionArchive[]>()().notNull(),
    sites: int().notNull(),
    siteNames: jsonText<string[]>()().notNull(),
    /** Positions found in the archive, if any. */
    positions: jsonText<number[][]>()(),
    countType: mysqlEnum(["uint16", "float32"]).notNull(),
    /** `[k]`, µs */
    timesUs: jsonText<number[]>()().notNull(),
    /** `[k]`, the `timeSlot` under which the blocks of that time are kept. */
    timeSlots: jsonText<number[]>()().notNull(),
    /** `[k]`, kept shots M_k */
    shotsPerTime: jsonText<number[]>()().notNull(),
    shotsSetAside: jsonText<Record<string, number>>()().notNull(),
    calibrationDarkShots: int().notNull(),
    calibrationBrightShots: int().notNull(),
    /** `[k][site]`, mean count of the kept shots. */
    brightness: jsonText<number[][]>()().notNull(),
    /** `[site]`; null in versions read before drift was looked at. */
    drift: jsonText<SiteDrift[]>()(),
    warnings: jsonText<{ code: string; message: string }[]>()().notNull(),
    createdAt: moment().notNull(),
  },
  (table) => [primaryKey({ columns: [table.runId, table.number] })],
);
