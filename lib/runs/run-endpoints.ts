import { z } from "zod";
import { endpoint } from "@/lib/http/endpoint";
import { Id } from "@/lib/http/id-params";
import { PageQuery } from "@/lib/http/page-query";
import { BrightIsField, CreateRunInput, ModelField, UpdateRunInput } from "./run-schemas";

const ProblemBody = z.object({ type: z.string(), title: z.string(), status: z.number(), detail: z.string(), errors: z.array(z.object({ where: z.string(), message: z.string() })).optional() });

const ArchiveAnswer = z.object({
  id: z.string(),
  filename: z.string(),
  bytes: z.number(),
  sha256: z.string(),
  role: z.enum(["shots", "calibration-dark", "calibration-bright"]),
  state: z.enum(["waiting", "read", "refused"]),
  format: z.string().nullable(),
  problem: ProblemBody.nullable(),
  createdAt: z.iso.datetime(),
  createdBy: z.string(),
});

export const RunAnswer = z.object({
  id: z.string(),
  title: z.string(),
  notes: z.string(),
  status: z.enum(["empty", "ingesting", "ready", "failed"]),
  brightIs: BrightIsField,
  model: ModelField,
  jMaxHz: z.number().nullable(),
  alpha: z.number().nullable(),
  campaign: z.string().nullable(),
  positions: z.array(z.array(z.number())).nullable(),
  version: z.number().meta({ description: "0 before the first archive has been read" }),
  sites: z.number(),
  siteNames: z.array(z.string()),
  countType: z.enum(["uint16", "float32"]).nullable(),
  times_us: z.array(z.number()),
  shotsPerTime: z.array(z.number()),
  shotsSetAside: z.record(z.string(), z.number()),
  calibrationDarkShots: z.number(),
  calibrationBrightShots: z.number(),
  warnings: z.array(z.object({ code: z.string(), message: z.string() })),
  archives: z.array(ArchiveAnswer),
  problem: ProblemBody.nullable().meta({ description: "Why the latest reading was refused; the version before it stands" }),
  latestJobId: z.string().nullable().meta({ description: "The latest reading or analysis of the run" }),
  createdBy: z.string(),
  createdAt: z.iso.datetime(),
  updatedAt: z.iso.datetime(),
});

const params = z.object({ runId: Id });

export const createRunEndpoint = endpoint({
  method: "POST",
  path: "/api/v1/runs",
  action: "run.create",
  summary: "Make an empty run",
  body: CreateRunInput,
  idempotent: true,
  answers: { 201: { description: "The run", schema: RunAnswer } },
  example: { title: "Night 12", model: "xy", brightIs: "up", alpha: 0.9 },
});

export const listRunsEndpoint = endpoint({
  method: "GET",
  path: "/api/v1/runs",
  action: "run.read",
  summary: "The group's runs, newest first",
  query: PageQuery,
  answers: { 200: { description: "A page of runs", schema: z.object({ items: z.array(RunAnswer), nextCursor: z.string().nullable() }) } },
});

export const getRunEndpoint = endpoint({
  method: "GET",
  path: "/api/v1/runs/{runId}",
  action: "run.read",
  summary: "A run with its current version and archives",
  params,
  answers: { 200: { description: "The run", schema: RunAnswer } },
});

export const updateRunEndpoint = endpoint({
  method: "PATCH",
  path: "/api/v1/runs/{runId}",
  action: "run.update",
  summary: "Change metadata; shots and saved results stay untouched",
  params,
  body: UpdateRunInput,
  answers: { 200: { description: "The run", schema: RunAnswer } },
  example: { notes: "simulated" },
});

export const deleteRunEndpoint = endpoint({
  method: "DELETE",
  path: "/api/v1/runs/{runId}",
  action: "run.delete",
  summary: "Remove a run with its archives, detections and analyses",
  params,
  answers: { 204: { description: "Removed" } },
});

export const histogramsEndpoint = endpoint({
  method: "GET",
  path: "/api/v1/runs/{runId}/histograms",
  action: "run.read",
  summary: "How often each count occurs at each site",
  params,
  query: z.object({ site: z.coerce.number().int().min(0).optional(), role: z.enum(["shots", "calibration-dark", "calibration-bright"]).default("shots") }),
  answers: {
    200: {
      description: "Frequencies by count; bin b holds counts from firstBin + b",
      schema: z.object({ version: z.number(), sites: z.array(z.object({ site: z.number(), name: z.string(), firstBin: z.number(), counts: z.array(z.number()) })) }),
    },
  },
});

export const brightnessEndpoint = endpoint({
  method: "GET",
  path: "/api/v1/runs/{runId}/brightness",
  action: "run.read",
  summary: "Mean count of every site at every time",
  params,
  answers: {
    200: { description: "Arrays are [time][site]", schema: z.object({ version: z.number(), siteNames: z.array(z.string()), times_us: z.array(z.number()), brightness: z.array(z.array(z.number())) }) },
  },
});
