import { showJob } from "@/lib/jobs/show-job";
import type { StudyRow } from "./find-study";

/** A study as lists show it: everything but the result, of which only the sentence. */
export function showStudyHead({ study, sentence, job, runId, createdByName }: StudyRow) {
  return {
    id: study.id,
    analysisId: study.analysisId,
    runId,
    kind: study.kind,
    state: job.state,
    parameters: study.parameters,
    sentence,
    job: showJob(job),
    createdBy: createdByName,
    createdAt: study.createdAt.toISOString(),
    finishedAt: study.finishedAt?.toISOString() ?? null,
  };
}
