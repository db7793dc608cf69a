/** The closed list of what can be wrong with a request or a file; each code has one HTTP status (RFC 9110). */
export const PROBLEM_STATUS = {
  "malformed-request": 400,
  "not-signed-in": 401,
  "not-allowed": 403,
  "not-found": 404,
  conflict: 409,
  "too-large": 413,
  "unknown-format": 415,
  "invalid-input": 422,
  "too-many-requests": 429,
  "not-ready": 503,
} as const;

export type ProblemCode = keyof typeof PROBLEM_STATUS;

/** One thing that is wrong: `where` names a field or a file place such as `shots.csv line 12 column site_3`. */
export interface ProblemPlace {
  where: string;
  message: string;
}

/** Bad input as a value: what is wrong, and where. Exceptions are for bugs. */
export interface Problem {
  readonly _tag: "Problem";
  code: ProblemCode;
  title: string;
  detail: string;
  errors: ProblemPlace[];
  /** Seconds after which another try makes sense. */
  retryAfter_s?: number;
}

const TITLES: Record<ProblemCode, string> = {
  "malformed-request": "The request cannot be read",
  "not-signed-in": "Sign in first",
  "not-allowed": "Your role or token does not allow this",
  "not-found": "Nothing here under this name",
  conflict: "This contradicts what is already there",
  "too-large": "Too large",
  "unknown-format": "Unknown format",
  "invalid-input": "The input is not valid",
  "too-many-requests": "Too many attempts",
  "not-ready": "Not ready yet",
};

/** Returns a Problem with the code's standing title. */
export function problem(code: ProblemCode, detail: string, errors: ProblemPlace[] = []): Problem {
  return { _tag: "Problem", code, title: TITLES[code], detail, errors };
}

/** Returns an `invalid-input` Problem with a single place, whose message is also the detail. */
export function invalidAt(where: string, message: string): Problem {
  return problem("invalid-input", `${where}: ${message}`, [{ where, message }]);
}

/** Narrows a verb's answer to its Problem. */
export function isProblem(value: unknown): value is Problem {
  return typeof value === "object" && value !== null && "_tag" in value && value._tag === "Problem";
}
