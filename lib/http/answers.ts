import { PROBLEM_STATUS, type Problem } from "@/lib/problem";

const UNCACHED = { "cache-control": "private, no-store" };

/** Returns a JSON answer that no cache keeps. */
export function json(value: unknown, status = 200, headers: Record<string, string> = {}): Response {
  return Response.json(value, { status, headers: { ...UNCACHED, ...headers } });
}

/** Returns 201 with what was made. */
export function created(value: unknown): Response {
  return json(value, 201);
}

/** Returns 202: the work goes on in the background. */
export function accepted(value: unknown): Response {
  return json(value, 202);
}

/** Returns 204 without a body. */
export function noContent(headers: Record<string, string> = {}): Response {
  return new Response(null, { status: 204, headers: { ...UNCACHED, ...headers } });
}

/** A problem as RFC 9457 writes it; also how a job's error is answered. */
export interface ProblemDocument {
  type: string;
  title: string;
  status: number;
  detail: string;
  errors?: { where: string; message: string }[];
}

/** Returns the RFC 9457 object of a problem, without `errors` when there are none. */
export function problemDocument(problem: Problem): ProblemDocument {
  return {
    type: `urn:strandline:problem:${problem.code}`,
    title: problem.title,
    status: PROBLEM_STATUS[problem.code],
    detail: problem.detail,
    ...(problem.errors.length > 0 && { errors: problem.errors }),
  };
}

/** Returns the problem as `application/problem+json`, with `Retry-After` when another try makes sense. */
export function problemResponse(problem: Problem): Response {
  return problemJson(problemDocument(problem), {
    ...(problem.retryAfter_s !== undefined && { "retry-after": String(Math.max(1, Math.ceil(problem.retryAfter_s))) }),
    ...(problem.code === "not-signed-in" && { "www-authenticate": 'Bearer realm="Strandline"' }),
  });
}

/** Returns the answer to a bug of ours: a fixed text, whatever happened. */
export function unexpectedFailure(): Response {
  return problemJson({
    type: "urn:strandline:problem:unexpected",
    title: "Something failed on our side",
    status: 500,
    detail: "The request was not the cause. It has been logged; try again, and tell the person who runs this server if it stays.",
  });
}

function problemJson(document: ProblemDocument, headers: Record<string, string> = {}): Response {
  return json(document, document.status, { "content-type": "application/problem+json", ...headers });
}
