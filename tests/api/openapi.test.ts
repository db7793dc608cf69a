import { expect, it } from "vitest";
import { ENDPOINTS } from "@/app/api/v1/endpoints";
import { call } from "./client";

it("serves the OpenAPI document to anybody, with every endpoint in it", async () => {
  const response = await call("GET", "/api/v1/openapi.json");
  expect(response.status).toBe(200);
  const document = (await response.json()) as { openapi: string; paths: Record<string, Record<string, unknown>> };
  expect(document.openapi).toMatch(/^3\.1\./);
  for (const { method, path } of ENDPOINTS) expect(Object.keys(document.paths[path])).toContain(method.toLowerCase());
});
