import { z } from "zod";
import { endpoint } from "@/lib/http/endpoint";
import { Id } from "@/lib/http/id-params";

const ProblemBody = z.object({
  type: z.string(),
  title: z.string(),
  status: z.number(),
  detail: z.string(),
  errors: z.array(z.object({ where: z.string(), message: z.string() })).optional(),
});

export const JobAnswer = z.object({
  id: z.string(),
  kind: z.enum(["ingest", "analysis", "study"]),
  runId: z.string(),
  state: z.enum(["queued", "running", "done", "failed", "cancelled"]),
  progress: z.number().min(0).max(1),
  stage: z.string(),
  error: ProblemBody.nullable(),
  result: z.record(z.string(), z.unknown()).nullable(),
  createdAt: z.iso.datetime(),
  finishedAt: z.iso.datetime().nullable(),
});

const params = z.object({ jobId: Id });

export const getJobEndpoint = endpoint({
  method: "GET",
  path: "/api/v1/jobs/{jobId}",
  action: "job.read",
  summary: "Where a job stands",
  params,
  answers: { 200: { description: "The job", schema: JobAnswer } },
});

export const cancelJobEndpoint = endpoint({
  method: "DELETE",
  path: "/api/v1/jobs/{jobId}",
  action: "job.cancel",
  summary: "Ask a job to cancel; an ended job stays as it is",
  params,
  answers: { 200: { description: "The job as it stands now", schema: JobAnswer } },
});

export const jobEventsEndpoint = endpoint({
  method: "GET",
  path: "/api/v1/jobs/{jobId}/events",
  action: "job.read",
  summary: "Server-sent events of a job: `event: progress` with the job, to its final state",
  params,
  answers: { 200: { description: "A stream of events", contentType: "text/event-stream" } },
});

export const listRunJobsEndpoint = endpoint({
  method: "GET",
  path: "/api/v1/runs/{runId}/jobs",
  action: "job.read",
  summary: "The latest jobs of a run, newest first",
  params: z.object({ runId: Id }),
  answers: { 200: { description: "At most 20 jobs", schema: z.object({ items: z.array(JobAnswer), nextCursor: z.null() }) } },
});
