import { describe, expect, it } from "vitest";
import { ENDPOINTS } from "@/app/api/v1/endpoints";
import { openapiDocument } from "@/lib/http/openapi";

interface Operation {
  operationId: string;
  security: object[];
  parameters?: { name: string; in: string; required: boolean; schema: object }[];
  requestBody?: { content: Record<string, { schema: { required?: string[]; additionalProperties?: boolean }; example?: unknown }> };
  responses: Record<string, { description: string }>;
}

const document = openapiDocument(ENDPOINTS) as { openapi: string; paths: Record<string, Record<string, Operation>> };
const operations = Object.values(document.paths).flatMap((path) => Object.values(path));

describe("the OpenAPI document", () => {
  it("is 3.1 and has one operation per endpoint, each with its own name", () => {
    expect(document.openapi).toBe("3.1.0");
    expect(operations).toHaveLength(ENDPOINTS.length);
    expect(new Set(operations.map(({ operationId }) => operationId)).size).toBe(ENDPOINTS.length);
  });

  it("describes each path's parameters, all of them required", () => {
    for (const [path, methods] of Object.entries(document.paths)) {
      const names = [...path.matchAll(/\{(\w+)\}/g)].map(([, name]) => name);
      for (const { parameters = [] } of Object.values(methods)) {
        const inPath = parameters.filter((parameter) => parameter.in === "path");
        expect(inPath.map(({ name }) => name)).toEqual(names);
        expect(inPath.every(({ required }) => required)).toBe(true);
      }
    }
  });

  it("has the schema that validates the request, unknown fields refused", () => {
    const body = document.paths["/api/v1/tokens"].post.requestBody?.content["application/json"];
    expect(body?.schema.required).toEqual(["name", "scopes", "expiresInDays"]);
    expect(body?.schema.additionalProperties).toBe(false);
    expect(body?.example).toEqual({ name: "apparatus", scopes: ["read", "upload"], expiresInDays: 90 });
  });

  it("says which calls are open, which take a token, and which only a session", () => {
    expect(document.paths["/api/v1/health"].get.security).toEqual([]);
    expect(document.paths["/api/v1/me"].get.security).toEqual([{ token: [] }, { session: [] }]);
    expect(document.paths["/api/v1/tokens"].post.security).toEqual([{ session: [] }]);
  });

  it("names a problem as every call's other answer", () => {
    for (const { responses } of operations) expect(Object.keys(responses)).toContain("default");
  });

  it("stands by itself: every reference leads to a part of it", () => {
    const references = [...JSON.stringify(document).matchAll(/"\$ref":"([^"]+)"/g)].map(([, reference]) => reference);
    expect(new Set(references)).toEqual(new Set(["#/components/schemas/Problem"]));
  });
});
