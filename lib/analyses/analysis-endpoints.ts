import { z } from "zod";
import { endpoint } from "@/lib/http/endpoint";
import { Id } from "@/lib/http/id-params";
import { JobAnswer } from "@/lib/jobs/job-endpoints";
import { CreateAnalysisInput } from "./analysis-schemas";

const Numbers = z.array(z.number().nullable());
const Figure = z.object({ value: z.number().nullable(), error: z.number().nullable(), low: z.number().nullable(), high: z.number().nullable(), unbounded: z.boolean().optional() });

export const AnalysisAnswer = z.object({
  id: z.string(),
  runId: z.string(),
  runTitle: z.string(),
  number: z.number(),
  label: z.string().nullable(),
  state: z.enum(["queued", "running", "done", "failed", "cancelled"]),
  stale: z.boolean(),
  parameters: z.record(z.string(), z.unknown()),
  provenance: z.object({
    runVersion: z.number(),
    archives: z.array(z.object({ archiveId: z.string(), filename: z.string(), sha256: z.string(), role: z.string(), format: z.string() })),
    brightIs: z.enum(["up", "down"]),
    positions: z.array(z.array(z.number())),
    detectionId: z.string(),
    detectionNumber: z.number(),
    seed: z.number(),
    programVersion: z.string(),
  }),
  summary: z
    .object({
      verdict: z.string(),
      verdictSentence: z.string(),
      beta: Figure.nullable(),
      gamma: Figure.nullable(),
      v_sites_per_ms: Figure.nullable(),
      resolvedPoints: z.number(),
      points: z.number(),
      warnings: z.array(z.string()),
    })
    .nullable(),
  job: JobAnswer,
  createdBy: z.string(),
  createdAt: z.iso.datetime(),
  finishedAt: z.iso.datetime().nullable(),
});

const runParams = z.object({ runId: Id });
const params = z.object({ analysisId: Id });

export const createAnalysisEndpoint = endpoint({
  method: "POST",
  path: "/api/v1/runs/{runId}/analyses",
  action: "analysis.create",
  summary: "Start an analysis; every field but detectionId has a default",
  params: runParams,
  body: CreateAnalysisInput,
  idempotent: true,
  answers: {
    202: { description: "Recorded and waiting for a worker", schema: z.object({ analysis: z.object({ id: z.string(), number: z.number() }), job: z.object({ id: z.string() }) }) },
  },
  example: { detectionId: "0123456789abcdef01234567", bootstrap: { replicates: 200, seed: 1 } },
});

export const listAnalysesEndpoint = endpoint({
  method: "GET",
  path: "/api/v1/runs/{runId}/analyses",
  action: "analysis.read",
  summary: "The latest analyses of a run, newest first",
  params: runParams,
  answers: { 200: { description: "At most 200 analyses", schema: z.object({ items: z.array(AnalysisAnswer), nextCursor: z.null() }) } },
});

export const getAnalysisEndpoint = endpoint({
  method: "GET",
  path: "/api/v1/analyses/{analysisId}",
  action: "analysis.read",
  summary: "Parameters, provenance, summary and state of an analysis",
  params,
  answers: { 200: { description: "The analysis", schema: AnalysisAnswer } },
});

export const correlatorsEndpoint = endpoint({
  method: "GET",
  path: "/api/v1/analyses/{analysisId}/correlators",
  action: "analysis.read",
  summary: "Means and all connected correlators with errors and 95 % intervals",
  params,
  query: z.object({ format: z.enum(["json", "csv", "npz"]).default("json"), time_index: z.coerce.number().int().min(0).optional() }),
  answers: {
    200: {
      description: "mean is [time][site], value, error, low and high are [time][pair]; null where there is no number",
      schema: z.object({
        times_us: z.array(z.number()),
        sites: z.number(),
        siteNames: z.array(z.string()),
        mean: z.array(Numbers),
        meanError: z.array(Numbers),
        pairs: z.array(z.tuple([z.number(), z.number()])),
        value: z.array(Numbers),
        error: z.array(Numbers),
        low: z.array(Numbers),
        high: z.array(Numbers),
        fewFlips: z.array(z.array(z.boolean())),
        pValue: z.array(Numbers).nullable(),
        significant: z.array(z.array(z.boolean())).nullable(),
      }),
    },
  },
});

export const tracesEndpoint = endpoint({
  method: "GET",
  path: "/api/v1/analyses/{analysisId}/traces",
  action: "analysis.read",
  summary: "The analysis's traces, or those of another reference site or by distance from its saved pairs",
  params,
  query: z
    .object({ format: z.enum(["json", "csv"]).default("json"), reference: z.coerce.number().int().min(0).optional(), kind: z.literal("distance").optional() })
    .refine((query) => query.reference === undefined || query.kind === undefined, { path: ["kind"], message: "give either reference or kind=distance" }),
  answers: {
    200: {
      description: "value, error, low and high are [trace][time]; averages made from saved pairs have no errors",
      schema: z.object({
        kind: z.enum(["reference", "distance"]),
        referenceSite: z.number().nullable(),
        labels: z.array(z.string()),
        distances: z.array(z.number()),
        times_us: z.array(z.number()),
        value: z.array(Numbers),
        error: z.array(Numbers),
        low: z.array(Numbers),
        high: z.array(Numbers),
        fewFlips: z.array(z.array(z.boolean())),
        bandLow: z.array(Numbers).nullable(),
        bandHigh: z.array(Numbers).nullable(),
        significant: z.array(z.array(z.boolean())).nullable(),
      }),
    },
  },
});

export const frontEndpoint = endpoint({
  method: "GET",
  path: "/api/v1/analyses/{analysisId}/front",
  action: "analysis.read",
  summary: "Crossing times, both fits, their comparison and the verdict",
  params,
  query: z.object({ format: z.enum(["json", "csv"]).default("json") }),
  answers: { 200: { description: "The front", schema: z.looseObject({ verdict: z.string(), verdictSentence: z.string(), points: z.array(z.looseObject({ label: z.string(), distance: z.number(), status: z.string() })) }) } },
});

export const figureEndpoint = endpoint({
  method: "GET",
  path: "/api/v1/analyses/{analysisId}/figures/{figure}",
  action: "analysis.read",
  summary: "A figure as SVG: map.svg, traces.svg, front.svg or histograms.svg",
  params: z.object({ analysisId: Id, figure: z.string().regex(/^(map|traces|front|histograms)\.svg$/) }),
  query: z.object({ width_mm: z.coerce.number().min(40).max(400).default(86), theme: z.enum(["paper", "night"]).default("paper") }),
  answers: { 200: { description: "The figure with its parameters and hashes as metadata", contentType: "image/svg+xml" } },
});
