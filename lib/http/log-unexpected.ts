import { databaseErrorCode } from "@/db/transaction";

/** Logs a bug in one line. A database error gives its code only: its message holds every parameter, secrets included. */
export function logUnexpected(what: string, error: unknown): void {
  console.error(`${what} failed: ${databaseErrorCode(error) ?? oneLine(error)}`);
}

function oneLine(error: unknown): string {
  if (!(error instanceof Error)) return "not an Error";
  const place = error.stack?.split("\n").find((line) => line.trimStart().startsWith("at "))?.trim() ?? "";
  if (error.message.startsWith("Failed query")) return `database error ${place}`.trimEnd();
  return `${error.name}: ${error.message.split("\n")[0].slice(0, 300)} ${place}`.trimEnd();
}
