import { z } from "zod";
import { endpoint } from "./endpoint";

export const openapiEndpoint = endpoint({
  method: "GET",
  path: "/api/v1/openapi.json",
  action: "public",
  summary: "This document",
  answers: { 200: { description: "OpenAPI 3.1", schema: z.record(z.string(), z.unknown()) } },
});
