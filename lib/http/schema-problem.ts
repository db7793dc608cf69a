import type { z } from "zod";
import { problem, type Problem, type ProblemPlace } from "@/lib/problem";

const MOST_PLACES = 50;
const KINDS: Partial<Record<string, string>> = { number: "a number", int: "a whole number", string: "text", boolean: "true or false", array: "a list", object: "an object" };

/** Returns an `invalid-input` problem that names each field; `whole` is the place of what concerns the input as one. */
export function schemaProblem(error: z.ZodError, whole: "body" | "query"): Problem {
  const places = error.issues.flatMap((issue) => placesOf(issue, whole)).slice(0, MOST_PLACES);
  const [first] = places;
  const more = places.length > 1 ? ` (and ${places.length - 1} more)` : "";
  return problem("invalid-input", `${first.where}: ${first.message}${more}`, places);
}

function placesOf(issue: z.core.$ZodIssue, whole: string): ProblemPlace[] {
  if (issue.code === "unrecognized_keys") {
    return issue.keys.map((key) => ({ where: fieldPath([...issue.path, key], whole), message: "there is no such field here" }));
  }
  return [{ where: fieldPath(issue.path, whole), message: messageOf(issue) }];
}

function messageOf(issue: z.core.$ZodIssue): string {
  if (issue.code !== "invalid_type") return issue.message;
  return issue.message.endsWith("received undefined") ? "is missing" : `must be ${KINDS[issue.expected] ?? issue.expected}`;
}

/** `["bootstrap", "replicates"]` → `bootstrap.replicates`; `["thresholds", 3]` → `thresholds[3]`. */
function fieldPath(path: PropertyKey[], whole: string): string {
  if (path.length === 0) return whole;
  return path.reduce<string>((text, key) => {
    if (typeof key === "number") return `${text}[${key}]`;
    return text === "" ? String(key) : `${text}.${String(key)}`;
  }, "");
}
