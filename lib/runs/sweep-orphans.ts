import "server-only";
import { eq, inArray, isNull } from "drizzle-orm";
import type { Database } from "@/db/connection";
import { analyses } from "@/db/schema/analyses";
import { resultArrays } from "@/db/schema/result-arrays";
import { runs } from "@/db/schema/runs";
import { shotBlocks } from "@/db/schema/shot-blocks";

/**
 * Removes blocks and result arrays that a worker wrote after their run had been removed, when it was killed before it
 * noticed. Returns how many runs and analyses they were of.
 */
export async function sweepOrphans(database: Database): Promise<number> {
  // DISTINCT over the front of a primary key jumps from value to value; the bytes are not read.
  const withBlocks = database.selectDistinct({ id: shotBlocks.runId }).from(shotBlocks).as("with_blocks");
  const withArrays = database.selectDistinct({ id: resultArrays.analysisId }).from(resultArrays).as("with_arrays");
  const goneRuns = await database.select({ id: withBlocks.id }).from(withBlocks).leftJoin(runs, eq(runs.id, withBlocks.id)).where(isNull(runs.id));
  const goneAnalyses = await database.select({ id: withArrays.id }).from(withArrays).leftJoin(analyses, eq(analyses.id, withArrays.id)).where(isNull(analyses.id));
  if (goneRuns.length > 0) await database.delete(shotBlocks).where(inArray(shotBlocks.runId, goneRuns.map(({ id }) => id)));
  if (goneAnalyses.length > 0) await database.delete(resultArrays).where(inArray(resultArrays.analysisId, goneAnalyses.map(({ id }) => id)));
  return goneRuns.length + goneAnalyses.length;
}
