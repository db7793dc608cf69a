import { mkdtempSync, rmSync } from "node:fs";
import os from "node:os";
import path from "node:path";
import { fileURLToPath, pathToFileURL } from "node:url";
import { build } from "esbuild";

const root = fileURLToPath(new URL("..", import.meta.url));
const scratch = mkdtempSync(path.join(os.tmpdir(), "strandline-demo-"));
const outfile = path.join(scratch, "write.mjs");

process.chdir(root);
await build({ entryPoints: ["scripts/demo-data/write.ts"], outfile, bundle: true, platform: "node", format: "esm", target: "node20", alias: { "@": root.replace(/\/$/, "") }, logLevel: "warning" });
await import(pathToFileURL(outfile).href);
rmSync(scratch, { recursive: true });
