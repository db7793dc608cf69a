import { showJob } from "@/lib/jobs/show-job";
import type { AnalysisRow } from "./find-analysis";

/** An analysis as the API shows it: parameters, provenance, summary and state. */
export function showAnalysis({ analysis, job, runTitle, currentVersion, createdByName }: AnalysisRow) {
  return {
    id: analysis.id,
    runId: analysis.runId,
    runTitle,
    number: analysis.number,
    label: analysis.label,
    state: job.state,
    /** The run has been read anew since. */
    stale: analysis.runVersion !== currentVersion,
    parameters: analysis.parameters,
    provenance: { ...analysis.provenance, detectionId: analysis.detectionId, seed: analysis.parameters.bootstrap.seed },
    summary: analysis.summary,
    job: showJob(job),
    createdBy: createdByName,
    createdAt: analysis.createdAt.toISOString(),
    finishedAt: analysis.finishedAt?.toISOString() ?? null,
  };
}
export type ShownAnalysis = ReturnType<typeof showAnalysis>;
