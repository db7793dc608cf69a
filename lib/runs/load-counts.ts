import "server-only";
import { and, asc, eq } from "drizzle-orm";
import type { Database } from "@/db/connection";
import { BRIGHT_SLOT, DARK_SLOT } from "@/db/schema/shot-blocks";
import { siteHistograms } from "@/db/schema/site-histograms";
import type { CalibrationCounts } from "@/lib/science/detection/calibration";
import type { SiteHistogram } from "@/lib/science/detection/histogram";
import { readBlocks, type VersionKey } from "./block-store";
import { joinBlocks, type ShotBlock } from "./shot-block";

/** Returns the kept shots of the slot in order, `counts` `[shot][site]`. */
export async function loadSlot(database: Database, key: VersionKey, slot: number, sites: number): Promise<ShotBlock> {
  return joinBlocks(await readBlocks(database, key, slot), sites);
}

/** Returns the calibration shots of a version, or null without both kinds. */
export async function loadCalibration(database: Database, key: VersionKey, sites: number): Promise<CalibrationCounts | null> {
  const [dark, bright] = await Promise.all([loadSlot(database, key, DARK_SLOT, sites), loadSlot(database, key, BRIGHT_SLOT, sites)]);
  return dark.shots > 0 && bright.shots > 0 ? { dark: dark.counts, bright: bright.counts, sites } : null;
}

export type HistogramRole = "shots" | "calibration-dark" | "calibration-bright";

/** Returns the count histograms of a version, `[site]`. */
export async function loadHistograms(database: Database, key: VersionKey, role: HistogramRole): Promise<SiteHistogram[]> {
  const rows = await database
    .select({ firstBin: siteHistograms.firstBin, data: siteHistograms.data })
    .from(siteHistograms)
    .where(and(eq(siteHistograms.runId, key.runId), eq(siteHistograms.version, key.version), eq(siteHistograms.role, role)))
    .orderBy(asc(siteHistograms.site));
  return rows.map(({ firstBin, data }) => ({ firstBin, frequencies: new Uint32Array(Uint8Array.from(data).buffer) }));
}
