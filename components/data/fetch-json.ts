import type { ProblemPlace } from "@/lib/problem";

/** An API answer that is not a success, with the places it names. */
export class ApiProblem extends Error {
  readonly status: number;
  readonly places: ProblemPlace[];

  constructor(status: number, detail: string, places: ProblemPlace[]) {
    super(detail);
    this.status = status;
    this.places = places;
  }
}

/** Fetches JSON from our own API; throws ApiProblem with the answer's detail when it is refused. */
export async function fetchJson<T>(path: string, init?: RequestInit): Promise<T> {
  const response = await fetch(path, init);
  if (response.ok) return (response.status === 204 ? undefined : await response.json()) as T;
  throw await problemOf(response);
}

/** Sends a JSON body and returns the JSON answer. */
export function sendJson<T>(method: "POST" | "PATCH" | "DELETE", path: string, body?: unknown): Promise<T> {
  return fetchJson<T>(path, {
    method,
    headers: body === undefined ? undefined : { "content-type": "application/json" },
    body: body === undefined ? undefined : JSON.stringify(body),
  });
}

async function problemOf(response: Response): Promise<ApiProblem> {
  const body: unknown = await response.json().catch(() => null);
  const detail = isRecord(body) && typeof body.detail === "string" ? body.detail : `The server answered ${response.status}.`;
  const places = isRecord(body) && Array.isArray(body.errors) ? (body.errors as ProblemPlace[]) : [];
  return new ApiProblem(response.status, detail, places);
}

function isRecord(value: unknown): value is Record<string, unknown> {
  return typeof value === "object" && value !== null;
}
