import "server-only";
import type { z } from "zod";
import { authenticate } from "@/lib/accounts/authenticate";
import { refusal, type Action, type Actor } from "@/lib/accounts/policy";
import { isProblem, problem, type Problem } from "@/lib/problem";
import { problemResponse, unexpectedFailure } from "./answers";
import type { Endpoint } from "./endpoint";
import { onceByKey } from "./idempotency";
import { logUnexpected } from "./log-unexpected";
import { readJsonBody } from "./read-json-body";
import { crossSiteProblem } from "./same-origin";
import { schemaProblem } from "./schema-problem";

type ActorFor<A> = A extends "public" ? null : Actor;

export interface Call<P extends z.ZodType, Q extends z.ZodType, B extends z.ZodType | null, A> {
  /** Null for public endpoints only. */
  actor: ActorFor<A>;
  params: z.output<P>;
  query: z.output<Q>;
  body: B extends z.ZodType ? z.output<B> : null;
  request: Request;
}

type Handler<P extends z.ZodType, Q extends z.ZodType, B extends z.ZodType | null, A> = (
  call: Call<P, Q, B, A>,
) => Promise<Response | Problem>;

/** Asked before query and body are looked at: the `not-found` Problem when what the path names is not there for this actor. */
type Absence<P extends z.ZodType, A> = (call: { actor: ActorFor<A>; params: z.output<P> }) => Promise<Problem | null>;

/** Next gives a path without parameters no `params`. */
export type RouteHandler = (request: Request, context: { params: Promise<Record<string, string> | undefined> }) => Promise<Response>;

/**
 * Returns the route handler of an endpoint. Order of checks: 401 who, 403 cross-site or not allowed, 404 path, then
 * 415, 413, 400, 422 query and body. Without `absence` the handler itself answers 404, once the input has been found valid.
 */
export function serve<P extends z.ZodType, Q extends z.ZodType, B extends z.ZodType | null, A extends Action | "public">(
  endpoint: Endpoint<P, Q, B, A>,
  handler: Handler<P, Q, B, A>,
  absence?: Absence<P, A>,
): RouteHandler {
  return async (request, context) => {
    try {
      const outcome = await handle(endpoint, handler, absence, request, (await context.params) ?? {});
      return isProblem(outcome) ? problemResponse(outcome) : outcome;
    } catch (error) {
      logUnexpected(`${endpoint.method} ${endpoint.path}`, error);
      return unexpectedFailure();
    }
  };
}

async function handle<P extends z.ZodType, Q extends z.ZodType, B extends z.ZodType | null, A extends Action | "public">(
  endpoint: Endpoint<P, Q, B, A>,
  handler: Handler<P, Q, B, A>,
  absence: Absence<P, A> | undefined,
  request: Request,
  pathFields: Record<string, string>,
): Promise<Response | Problem> {
  const admitted = await admit(endpoint.action, request);
  if (isProblem(admitted)) return admitted;
  const actor = admitted as ActorFor<A>;

  const params = endpoint.params.safeParse(pathFields);
  if (!params.success) return problem("not-found", "There is nothing under this address.");
  const absent = await absence?.({ actor, params: params.data });
  if (absent) return absent;

  const url = new URL(request.url);
  const query = endpoint.query.safeParse(queryFields(url.searchParams));
  if (!query.success) return schemaProblem(query.error, "query");
  const body = await readBody(endpoint.body, request);
  if (isProblem(body)) return body;

  const work = () => handler({ actor, params: params.data, query: query.data, body: body.value as Call<P, Q, B, A>["body"], request });
  const key = endpoint.idempotent ? request.headers.get("idempotency-key") : null;
  if (key === null || admitted === null) return work();
  return onceByKey(admitted, key, { method: endpoint.method, target: url.pathname + url.search, bodyText: body.text }, work);
}

async function admit(action: Action | "public", request: Request): Promise<Actor | null | Problem> {
  if (action === "public") return crossSiteProblem(request);
  const actor = await authenticate(request);
  if (isProblem(actor)) return actor;
  return crossSiteProblem(request) ?? refusal(actor, action) ?? actor;
}

/** A field given once is text, given more often a list, so that a schema for one value refuses it. */
function queryFields(search: URLSearchParams): Record<string, string | string[]> {
  return Object.fromEntries(
    [...new Set(search.keys())].map((name) => {
      const values = search.getAll(name);
      return [name, values.length === 1 ? values[0] : values];
    }),
  );
}

async function readBody(schema: z.ZodType | null, request: Request): Promise<{ value: unknown; text: string } | Problem> {
  if (schema === null) return { value: null, text: "" };
  const sent = await readJsonBody(request);
  if (isProblem(sent)) return sent;
  const parsed = schema.safeParse(sent.value);
  return parsed.success ? { value: parsed.data, text: sent.text } : schemaProblem(parsed.error, "body");
}
