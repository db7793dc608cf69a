import path from "node:path";
import { fileURLToPath } from "node:url";

export const ROOT = fileURLToPath(new URL("../..", import.meta.url));

/** Returns the settings of a start from the environment, defaults filled in. */
export function readSettings(environment) {
  return {
    host: environment.HOST || "127.0.0.1",
    port: wholeNumber(environment.PORT, 3000, "PORT"),
    dataDirectory: path.resolve(ROOT, environment.STRANDLINE_DATA || ".data"),
    databaseUrl: environment.DATABASE_URL || null,
    demo: (environment.STRANDLINE_DEMO ?? "1") !== "0",
    demoPassword: environment.STRANDLINE_DEMO_PASSWORD || "low-tide-demo",
    workers: wholeNumber(environment.STRANDLINE_WORKERS, 1, "STRANDLINE_WORKERS"),
    publicUrl: environment.PUBLIC_URL || null,
  };
}

function wholeNumber(text, fallback, name) {
  if (text === undefined || text === "") return fallback;
  if (!/^\d+$/.test(text)) throw new Error(`${name} must be a whole number, not "${text}"`);
  return Number(text);
}
