import { spawnSync } from "node:child_process";
import { createHash } from "node:crypto";
import { existsSync, readdirSync, readFileSync, writeFileSync } from "node:fs";
import path from "node:path";
import { ROOT } from "./settings.mjs";

const SOURCES = ["app", "components", "lib", "db", "migrations", "public", "package-lock.json", "package.json", "next.config.mjs", "tailwind.config.ts", "postcss.config.mjs", "tsconfig.json", "scripts/build-worker.mjs"];
const MARK = path.join(ROOT, ".next", "strandline-build");

/** Builds web and worker when the sources have changed since the last build. */
export function ensureBuild() {
  const fingerprint = sourceFingerprint();
  if (existsSync(MARK) && readFileSync(MARK, "utf8") === fingerprint) return;
  console.log("Building …");
  const { status, stdout, stderr } = spawnSync("npm", ["run", "--silent", "build"], {
    cwd: ROOT,
    encoding: "utf8",
    maxBuffer: 1 << 28,
    env: { ...process.env, NODE_ENV: "production", NEXT_TELEMETRY_DISABLED: "1" },
  });
  if (status !== 0) throw new Error(`the build failed:\n${stdout}\n${stderr}`);
  writeFileSync(MARK, fingerprint);
}

function sourceFingerprint() {
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
