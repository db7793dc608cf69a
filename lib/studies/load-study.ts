import "server-only";
import { and, eq } from "drizzle-orm";
import type { Database } from "@/db/connection";
import { analyses } from "@/db/schema/analyses";
import { detections, type DetectionSite } from "@/db/schema/detections";
import { frontStudies } from "@/db/schema/front-studies";
import { runVersions } from "@/db/schema/run-versions";
import type { JobRow } from "@/lib/jobs/job-context";
import type { ReadoutErrors } from "@/lib/science/correlators/readout-correction";

/** A study with the analysis it asks about and what that was made from. */
export type StudyInputs = NonNullable<Awaited<ReturnType<typeof loadStudy>>>;

/** Returns what a study job works on; null when it has been removed. */
export async function loadStudy(database: Database, job: JobRow) {
  if (job.payload.kind !== "study") throw new Error(`job ${job.id} is no study`);
  const [row] = await database
    .select({ study: frontStudies, analysis: analyses, version: runVersions, sites: detections.sites })
    .from(frontStudies)
    .innerJoin(analyses, eq(analyses.id, frontStudies.analysisId))
    .innerJoin(detections, eq(detections.id, analyses.detectionId))
    .innerJoin(runVersions, and(eq(runVersions.runId, analyses.runId), eq(runVersions.number, analyses.runVersion)))
    .where(and(eq(frontStudies.id, job.payload.studyId), eq(frontStudies.groupId, job.groupId)));
  return row ?? null;
}

/** Returns the ε's of a detection, null when one is unknown. */
export function knownReadoutErrors(sites: readonly DetectionSite[]): ReadoutErrors | null {
  if (sites.some(({ falseBright, falseDark }) => falseBright === null || falseDark === null)) return null;
  return {
    falseBright: Float64Array.from(sites, ({ falseBright }) => falseBright ?? Number.NaN),
    falseDark: Float64Array.from(sites, ({ falseDark }) => falseDark ?? Number.NaN),
  };
}
