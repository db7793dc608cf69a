import { z } from "zod";
import type { Action } from "@/lib/accounts/policy";

export type Method = "GET" | "POST" | "PATCH" | "DELETE";

export interface Answer {
  description: string;
  schema?: z.ZodType;
  /** `application/json` unless said otherwise. */
  contentType?: string;
}

/** One call of the HTTP API: what validates it, who may make it, and what OpenAPI says about it. */
export interface Endpoint<
  P extends z.ZodType = z.ZodType,
  Q extends z.ZodType = z.ZodType,
  B extends z.ZodType | null = z.ZodType | null,
  A extends Action | "public" = Action | "public",
> {
  method: Method;
  /** With its parameters in braces: `/api/v1/runs/{runId}`. */
  path: string;
  action: A;
  summary: string;
  params: P;
  query: Q;
  body: B;
  /** The raw bytes are read by the handler itself. */
  streamedBody?: true;
  /** Takes an `Idempotency-Key`. */
  idempotent?: true;
  answers: Record<number, Answer>;
  /** A body that the schema accepts; with `streamedBody`, text to send as raw bytes. */
  example?: unknown;
  /** Query fields that go with the example. */
  exampleQuery?: Record<string, string>;
}

const NOTHING = z.object({});
type Nothing = typeof NOTHING;

type Defaulted = "params" | "query" | "body";

/** Returns the endpoint with empty parameters, an empty query and no body where none are given. A body object refuses unknown fields. */
export function endpoint<
  P extends z.ZodType = Nothing,
  Q extends z.ZodType = Nothing,
  B extends z.ZodType | null = null,
  A extends Action | "public" = Action | "public",
>(given: Omit<Endpoint<P, Q, B, A>, Defaulted> & { params?: P; query?: Q; body?: B }): Endpoint<P, Q, B, A> {
  return {
    ...given,
    params: given.params ?? (NOTHING as unknown as P),
    query: given.query ?? (NOTHING as unknown as Q),
    body: refusingUnknownFields(given.body ?? (null as B)),
  };
}

function refusingUnknownFields<B extends z.ZodType | null>(body: B): B {
  if (!(body instanceof z.ZodObject) || body.def.catchall) return body;
  return body.strict() as unknown as B;
}
