import { z } from "zod";
import { endpoint } from "@/lib/http/endpoint";
import { Id } from "@/lib/http/id-params";
import { PageQuery } from "@/lib/http/page-query";
import { CreateDetectionInput } from "./detection-schemas";

const Rates = z.array(z.number().nullable());
const Intervals = z.array(z.tuple([z.number(), z.number()]).nullable());

const Extras = { leakDark: z.number().optional(), leakBright: z.number().optional(), darkExcess: z.number().optional(), brightExcess: z.number().optional() };

export const DetectionAnswer = z.object({
  id: z.string(),
  runId: z.string(),
  number: z.number(),
  runVersion: z.number(),
  stale: z.boolean().meta({ description: "The run has been read anew since" }),
  method: z.enum(["fixed", "mixture", "calibration"]),
  label: z.string().nullable(),
  thresholds: z.array(z.number()),
  falseBright: Rates.meta({ description: "P(reads bright | dark), by site" }),
  falseDark: Rates.meta({ description: "P(reads dark | bright), by site" }),
  falseBrightInterval: Intervals,
  falseDarkInterval: Intervals,
  fidelity: Rates,
  mixture: z.array(z.object({ dark: z.number(), bright: z.number(), brightWeight: z.number(), darkError: z.number().optional(), brightError: z.number().optional(), ...Extras }).nullable()),
  model: z.object({ name: z.string(), chosen: z.enum(["bic", "by-hand"]), bic: z.array(z.object({ name: z.string(), value: z.number() })), reason: z.string() }).nullable(),
  warnings: z.array(z.array(z.object({ code: z.string(), message: z.string() }))),
  createdBy: z.string(),
  createdAt: z.iso.datetime(),
});

const params = z.object({ runId: Id });

export const createDetectionEndpoint = endpoint({
  method: "POST",
  path: "/api/v1/runs/{runId}/detections",
  action: "detection.create",
  summary: "Save the next numbered detection; given thresholds are kept with any method",
  params,
  body: CreateDetectionInput,
  idempotent: true,
  answers: { 201: { description: "The detection", schema: DetectionAnswer } },
  example: { method: "fixed", threshold: 4.5 },
});

export const listDetectionsEndpoint = endpoint({
  method: "GET",
  path: "/api/v1/runs/{runId}/detections",
  action: "detection.read",
  summary: "A run's detections, newest first",
  params,
  query: PageQuery,
  answers: { 200: { description: "A page of detections", schema: z.object({ items: z.array(DetectionAnswer), nextCursor: z.string().nullable() }) } },
});

export const getDetectionEndpoint = endpoint({
  method: "GET",
  path: "/api/v1/detections/{detectionId}",
  action: "detection.read",
  summary: "One detection",
  params: z.object({ detectionId: Id }),
  answers: { 200: { description: "The detection", schema: DetectionAnswer } },
});
