import "server-only";
import { runAnalysisJob } from "@/lib/analyses/run-analysis";
import { ingestRun } from "@/lib/runs/ingest-run";
import type { JobHandler, JobRow } from "./job-context";

/** Who does which kind of job. */
export const JOB_HANDLERS: Record<JobRow["kind"], JobHandler> = { ingest: ingestRun, analysis: runAnalysisJob };
