import { z } from "zod";
import { endpoint } from "@/lib/http/endpoint";
import { Id } from "@/lib/http/id-params";
import { JobAnswer } from "@/lib/jobs/job-endpoints";
import { CreateStudyInput } from "./study-schemas";

const StudyHead = z.object({
  id: z.string(),
  analysisId: z.string(),
  runId: z.string(),
  kind: z.enum(["sweep", "null-front", "self-test"]),
  state: z.enum(["queued", "running", "done", "failed", "cancelled"]),
  parameters: z.record(z.string(), z.unknown()),
  sentence: z.string().nullable(),
  job: JobAnswer,
  createdBy: z.string(),
  createdAt: z.iso.datetime(),
  finishedAt: z.iso.datetime().nullable(),
});

const ofAnalysis = z.object({ analysisId: Id });

export const createStudyEndpoint = endpoint({
  method: "POST",
  path: "/api/v1/analyses/{analysisId}/studies",
  action: "study.create",
  summary: "Ask about a finished analysis: how much hangs on its choices, what a nearest-neighbour chain would give, whether its error bars are right here",
  params: ofAnalysis,
  body: CreateStudyInput,
  idempotent: true,
  answers: {
    202: { description: "Recorded and waiting for a worker", schema: z.object({ study: z.object({ id: z.string() }), job: z.object({ id: z.string() }) }) },
  },
  example: { kind: "sweep" },
});

export const listStudiesEndpoint = endpoint({
  method: "GET",
  path: "/api/v1/analyses/{analysisId}/studies",
  action: "analysis.read",
  summary: "The latest studies of an analysis, newest first, without their results",
  params: ofAnalysis,
  answers: { 200: { description: "At most 100 studies", schema: z.object({ items: z.array(StudyHead), nextCursor: z.null() }) } },
});

export const getStudyEndpoint = endpoint({
  method: "GET",
  path: "/api/v1/studies/{studyId}",
  action: "analysis.read",
  summary: "State, parameters and result of a study; the combinations of a sweep also as CSV",
  params: z.object({ studyId: Id }),
  query: z.object({ format: z.enum(["json", "csv"]).default("json") }),
  answers: { 200: { description: "The study; its result follows its kind and is null until it is done", schema: StudyHead.extend({ result: z.record(z.string(), z.unknown()).nullable() }) } },
});
