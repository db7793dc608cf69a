import { fileURLToPath } from "node:url";
import { build } from "esbuild";

const root = fileURLToPath(new URL("..", import.meta.url));

await build({
  absWorkingDir: root,
  entryPoints: { main: "lib/jobs/worker-main.ts", "thread-task": "lib/analyses/thread-task.ts", prepare: "db/prepare.ts" },
  outdir: ".next/worker",
  outExtension: { ".js": ".mjs" },
  bundle: true,
  platform: "node",
  format: "esm",
  target: "node20",
  packages: "external",
  sourcemap: true,
  logLevel: "warning",
  alias: { "@": root.replace(/\/$/, ""), "server-only": `${root}scripts/server-only-stand-in.mjs` },
});
