import { spawnSync } from "node:child_process";
import path from "node:path";
import { markBuild, sourceFingerprint } from "./start/build.mjs";
import { ROOT } from "./start/settings.mjs";

// `next build` empties its directory: the worker's bundle and the mark come after it.
const fingerprint = sourceFingerprint();
run("node_modules/next/dist/bin/next", "build");
run("scripts/build-worker.mjs");
markBuild(fingerprint);

function run(script, ...args) {
  const { status } = spawnSync(process.execPath, [path.join(ROOT, script), ...args], { cwd: ROOT, stdio: "inherit", env: { ...process.env, NODE_ENV: "production" } });
  if (status !== 0) process.exit(status ?? 1);
}
