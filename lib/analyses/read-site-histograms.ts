import "server-only";
import { eq } from "drizzle-orm";
import { database } from "@/db/connection";
import { detections } from "@/db/schema/detections";
import { loadHistograms } from "@/lib/runs/load-counts";
import type { AnalysisRow } from "./find-analysis";

/** Returns the histograms behind an analysis with its detection's thresholds and components, `[site]`. */
export async function readSiteHistograms({ analysis, siteNames }: AnalysisRow) {
  const [detection] = await database().select({ sites: detections.sites }).from(detections).where(eq(detections.id, analysis.detectionId));
  const histograms = await loadHistograms(database(), { runId: analysis.runId, version: analysis.runVersion }, "shots");
  return histograms.map(({ firstBin, frequencies }, site) => ({
    site,
    name: `site ${siteNames[site]}`,
    firstBin,
    frequencies: Array.from(frequencies),
    threshold: detection?.sites[site]?.threshold ?? null,
    mixture: detection?.sites[site]?.mixture ?? null,
  }));
}
