import type { ProblemPlace } from "@/lib/problem";

/** Problem as the API answers it (RFC 9457). */
export interface ProblemAnswer {
  title: string;
  status: number;
  detail: string;
  errors?: ProblemPlace[];
}

export interface JobAnswer {
  id: string;
  kind: "ingest" | "analysis" | "study";
  state: "queued" | "running" | "done" | "failed" | "cancelled";
  progress: number;
  stage: string;
  error?: ProblemAnswer | null;
}

export function isFinal(job: JobAnswer): boolean {
  return job.state === "done" || job.state === "failed" || job.state === "cancelled";
}
