/**
 * `npm run study`: how often the intervals hold the truth, on simulated data; tables to stdout and into docs/validation.md. Options: --only
 * correlators,fronts,threshold-free,fitted-laws; --repeats 300; --seed 1; --threads 2; --no-write leaves the document alone.
 */
import { spawnSync } from "node:child_process";
import { fileURLToPath } from "node:url";
import { build } from "esbuild";

const root = fileURLToPath(new URL("..", import.meta.url));
const folder = `${root}.data/study`;

await build({
  entryPoints: { "run-study": `${root}scripts/study/run-study.ts`, "study-thread": `${root}scripts/study/study-thread.ts` },
  outdir: folder,
  outExtension: { ".js": ".mjs" },
  bundle: true,
  platform: "node",
  format: "esm",
  target: "node20",
  alias: { "@": root.replace(/\/$/, "") },
  logLevel: "error",
});
const done = spawnSync(process.execPath, [`${folder}/run-study.mjs`, ...process.argv.slice(2)], { cwd: root, stdio: "inherit" });
process.exit(done.status ?? 1);
