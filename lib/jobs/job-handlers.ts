import "server-only";
import { runAnalysisJob } from "@/lib/analyses/run-analysis";
import { ingestRun, recordGivenUp } from "@/lib/runs/ingest-run";
import { runStudyJob } from "@/lib/studies/run-study";
import type { GivenUpRecord, JobHandler, JobRow } from "./job-context";

/** Who does which kind of job. */
export const JOB_HANDLERS: Record<JobRow["kind"], JobHandler> = { ingest: ingestRun, analysis: runAnalysisJob, study: runStudyJob };

/** What else is written when a job of a kind is given up. */
export const GIVEN_UP_RECORDS: Partial<Record<JobRow["kind"], GivenUpRecord>> = { ingest: recordGivenUp };
