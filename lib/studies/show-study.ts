import { showJob } from "@/lib/jobs/show-job";
import type { StudyRow } from "./find-study";

/** A study as lists show it: everything but the result, of which only the sentence. */
export function showStudyHead({ study, job, runId, createdByName }: StudyRow) {
  const sentence = study.result?.sentence;
  return {
    id: study.id,
    analysisId: study.analysisId,
    runId,
    kind: study.kind,
    state: job.state,
    parameters: study.parameters,
    sentence: typeof sentence === "string" ? sentence : null,
    job: showJob(job),
    createdBy: createdByName,
    createdAt: study.createdAt.toISOString(),
    finishedAt: study.finishedAt?.toISOString() ?? null,
  };
}

/** A study as the API shows it. */
export function showStudy(row: StudyRow) {
  return { ...showStudyHead(row), result: row.study.result };
}
