import { createHash } from "node:crypto";
import { existsSync, readdirSync, readFileSync, writeFileSync } from "node:fs";
import path from "node:path";
import { runCommand } from "./commands.mjs";
import { ROOT } from "./settings.mjs";

const SOURCES = ["app", "components", "lib", "db", "migrations", "public", "package-lock.json", "package.json", "proxy.ts", "next.config.mjs", "tailwind.config.ts", "postcss.config.mjs", "tsconfig.json", "scripts/build-worker.mjs", "scripts/server-only-stand-in.mjs"];
const MARK = path.join(ROOT, ".next", "strandline-build");

/** Builds web and worker when the sources have changed since the last build. */
export async function ensureBuild() {
  if (existsSync(MARK) && readFileSync(MARK, "utf8") === sourceFingerprint()) return;
  console.log("Building …");
  const environment = { ...process.env, NODE_ENV: "production", NEXT_TELEMETRY_DISABLED: "1" };
  await runCommand("npm", ["run", "--silent", "build"], { name: "the build", environment });
}

/** Bundles the worker alone, which takes a moment: in development Next builds its pages as they are asked for. */
export async function ensureWorkerBundle() {
  await runCommand(process.execPath, [path.join(ROOT, "scripts/build-worker.mjs")], { name: "bundling the worker" });
}

/** Notes of which sources the build is; the sources as they were before it, so that a change meanwhile makes it stale. */
export function markBuild(fingerprint) {
  writeFileSync(MARK, fingerprint);
}

/** Returns a hash of everything that goes into the build. */
export function sourceFingerprint() {
  const hash = createHash("sha256");
  for (const source of SOURCES) addTo(hash, source);
  return hash.digest("hex");
}

function addTo(hash, relative) {
  const place = path.join(ROOT, relative);
  if (!existsSync(place)) return;
  const entries = readEntries(place);
  if (entries === null) {
    hash.update(`${relative}\n`).update(readFileSync(place));
    return;
  }
  for (const entry of entries) addTo(hash, path.join(relative, entry));
}

/** The sorted names in a directory; null for a file. */
function readEntries(place) {
  try {
    return readdirSync(place).sort();
  } catch (error) {
    if (error.code === "ENOTDIR") return null;
    throw error;
  }
}
