import type { jobs } from "@/db/schema/jobs";
import { problemDocument, type ProblemDocument } from "@/lib/http/answers";

export interface ShownJob {
  id: string;
  kind: "ingest" | "analysis" | "study";
  runId: string;
  state: "queued" | "running" | "done" | "failed" | "cancelled";
  progress: number;
  stage: string;
  error: ProblemDocument | null;
  result: Record<string, unknown> | null;
  createdAt: string;
  finishedAt: string | null;
}

/** A job as the API shows it. */
export function showJob(row: typeof jobs.$inferSelect): ShownJob {
  return {
    id: row.id,
    kind: row.kind,
    runId: row.runId,
    state: row.state,
    progress: row.progress,
    stage: row.stage,
    error: row.error ? problemDocument(row.error) : null,
    result: row.result,
    createdAt: row.createdAt.toISOString(),
    finishedAt: row.finishedAt?.toISOString() ?? null,
  };
}

export function isFinalState(state: ShownJob["state"]): boolean {
  return state === "done" || state === "failed" || state === "cancelled";
}
