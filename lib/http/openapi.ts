import { z } from "zod";
import packageFile from "@/package.json";
import { POLICY, type Action } from "@/lib/accounts/policy";
import { SESSION_COOKIE } from "@/lib/accounts/session-cookie";
import { PROBLEM_STATUS } from "@/lib/problem";
import type { Answer, Endpoint } from "./endpoint";

type Json = Record<string, unknown>;

const PROBLEM_SCHEMA = {
  type: "object",
  description: "RFC 9457 problem",
  required: ["type", "title", "status", "detail"],
  properties: {
    type: { type: "string", format: "uri", examples: Object.keys(PROBLEM_STATUS).map((code) => `urn:strandline:problem:${code}`) },
    title: { type: "string" },
    status: { type: "integer" },
    detail: { type: "string" },
    errors: {
      type: "array",
      items: {
        type: "object",
        required: ["where", "message"],
        properties: { where: { type: "string", description: "A field, or a place in a file" }, message: { type: "string" } },
      },
    },
  },
};

const SECURITY_SCHEMES = {
  token: { type: "http", scheme: "bearer", description: "A token from the account page, with scopes and an expiry" },
  session: { type: "apiKey", in: "cookie", name: SESSION_COOKIE, description: "The browser's session, from POST /api/v1/session" },
};

/** Returns the OpenAPI 3.1 document of the endpoints, from the schemas that validate their requests. */
export function openapiDocument(endpoints: Endpoint[]): Json {
  const paths: Record<string, Json> = {};
  for (const endpoint of endpoints) {
    paths[endpoint.path] = { ...paths[endpoint.path], [endpoint.method.toLowerCase()]: operation(endpoint) };
  }
  return {
    openapi: "3.1.0",
    info: { title: "Strandline", version: packageFile.version, description: packageFile.description },
    servers: [{ url: "/" }],
    paths,
    components: { schemas: { Problem: PROBLEM_SCHEMA }, securitySchemes: SECURITY_SCHEMES },
  };
}

function operation(endpoint: Endpoint): Json {
  const parameters = [
    ...parametersIn(endpoint.params, "path"),
    ...parametersIn(endpoint.query, "query"),
    ...(endpoint.idempotent ? [IDEMPOTENCY_KEY] : []),
  ];
  return {
    operationId: operationId(endpoint),
    summary: endpoint.summary,
    description: whoMay(endpoint.action),
    security: security(endpoint.action),
    ...(parameters.length > 0 && { parameters }),
    ...requestBody(endpoint),
    responses: responses(endpoint),
  };
}

const IDEMPOTENCY_KEY = {
  name: "Idempotency-Key",
  in: "header",
  required: false,
  description:
    "The same call with the same key is done once and answered alike for a day; a refused call frees its key. Where the body is a file, the key goes with method, path and query only.",
  schema: { type: "string", minLength: 1, maxLength: 120 },
};

/** `POST /api/v1/runs/{runId}/archives` → `postRunsByRunIdArchives` */
export function operationId({ method, path }: Pick<Endpoint, "method" | "path">): string {
  const words = path.replace("/api/v1/", "").replaceAll("{", "by-").split(/[^A-Za-z0-9]+/);
  return method.toLowerCase() + words.map((word) => word.charAt(0).toUpperCase() + word.slice(1)).join("");
}

function whoMay(action: Action | "public"): string {
  if (action === "public") return "Anybody.";
  const rule: { from: string; scope: string; sessionOnly?: true } = POLICY[action];
  const token = rule.sessionOnly ? "not with a token" : `token scope \`${rule.scope}\``;
  return `From the role ${rule.from} up; ${token}.`;
}

function security(action: Action | "public"): Json[] {
  if (action === "public") return [];
  const rule: { scope: string; sessionOnly?: true } = POLICY[action];
  return rule.sessionOnly ? [{ session: [] }] : [{ token: [] }, { session: [] }];
}

function parametersIn(schema: z.ZodType, place: "path" | "query"): Json[] {
  const { properties = {}, required = [] } = jsonSchema(schema, "input") as { properties?: Record<string, Json>; required?: string[] };
  return Object.entries(properties).map(([name, { description, ...property }]) => ({
    name,
    in: place,
    required: place === "path" || required.includes(name),
    ...(description !== undefined && { description }),
    schema: property,
  }));
}

function requestBody(endpoint: Endpoint): Json {
  if (endpoint.streamedBody) return { requestBody: { required: true, content: FILE_BODY } };
  if (endpoint.body === null) return {};
  const example = endpoint.example === undefined ? {} : { example: endpoint.example };
  return { requestBody: { required: true, content: { "application/json": { schema: jsonSchema(endpoint.body, "input"), ...example } } } };
}

const FILE_BODY = {
  "multipart/form-data": {
    schema: { type: "object", required: ["file"], properties: { file: { type: "array", items: { type: "string", format: "binary" } } } },
  },
  "application/octet-stream": { schema: { type: "string", format: "binary" } },
};

function responses(endpoint: Endpoint): Json {
  const problem = { description: "A problem", content: { "application/problem+json": { schema: { $ref: "#/components/schemas/Problem" } } } };
  return { ...Object.fromEntries(Object.entries(endpoint.answers).map(([status, answer]) => [status, response(answer)])), default: problem };
}

function response({ description, schema, contentType }: Answer): Json {
  if (!schema && !contentType) return { description };
  return { description, content: { [contentType ?? "application/json"]: { schema: schema ? jsonSchema(schema, "output") : { type: "string" } } } };
}

/** What JSON Schema cannot say (a transform, a date) is left open rather than wrong. */
function jsonSchema(schema: z.ZodType, io: "input" | "output"): Json {
  const body: Json = { ...z.toJSONSchema(schema, { io, unrepresentable: "any" }) };
  delete body.$schema;
  return body;
}
