/**
 * `npm run bench`: the main job on a surrogate run, ours with one and two threads against the NumPy baseline, turn by
 * turn on the same cores; medians. Options: --sites 16 --times 40 --shots 4000 --rounds 3; --kernels measures our own steps instead,
 * --studies the simulated runs of null front and self-test.
 */
import { spawnSync } from "node:child_process";
import { existsSync, mkdirSync } from "node:fs";
import { fileURLToPath } from "node:url";
import { parseArgs } from "node:util";
import { build } from "esbuild";

const root = fileURLToPath(new URL("..", import.meta.url));
const folder = `${root}.data/bench`;
const baseline = `${root}scripts/bench/baseline_numpy.py`;
const { values: options } = parseArgs({
  options: {
    sites: { type: "string", default: "16" },
    times: { type: "string", default: "40" },
    shots: { type: "string", default: "4000" },
    rounds: { type: "string", default: "3" },
    kernels: { type: "boolean", default: false },
    studies: { type: "boolean", default: false },
    python: { type: "string", default: existsSync("/usr/bin/python3") ? "/usr/bin/python3" : "python3" },
  },
});

/** Baseline variants worth their time; `unique` also in two processes with one BLAS thread each. */
const BASELINES = [
  { name: "NumPy unique", arguments: ["--variant", "unique"] },
  { name: "NumPy unique, 2 processes", arguments: ["--variant", "unique", "--processes", "2"] },
  { name: "NumPy weights", arguments: ["--variant", "weights"] },
];
const REPEATS = "3";

requireNumpy();
mkdirSync(folder, { recursive: true });
await build({
  entryPoints: {
    "analyse-run": `${root}scripts/bench/analyse-run.ts`,
    "time-thread": `${root}scripts/bench/time-thread.ts`,
    "time-kernels": `${root}scripts/bench/time-kernels.ts`,
    "time-studies": `${root}scripts/bench/time-studies.ts`,
  },
  outdir: folder,
  outExtension: { ".js": ".mjs" },
  bundle: true,
  platform: "node",
  format: "esm",
  target: "node20",
  alias: { "@": root.replace(/\/$/, "") },
  logLevel: "error",
});
if (options.studies) {
  console.log(run(process.execPath, [`${folder}/time-studies.mjs`, options.sites, options.times, options.shots, options.rounds]).trimEnd());
  process.exit(0);
}
const file = `${folder}/run-${options.sites}-${options.times}-${options.shots}.npz`;
if (!existsSync(file)) run(options.python, [baseline, "--make", options.sites, options.times, options.shots, file]);

if (options.kernels) {
  console.log(`N = ${options.sites}, T = ${options.times}, M = ${options.shots}, B = 1000, one thread`);
  console.log(run(process.execPath, [`${folder}/time-kernels.mjs`, file, options.rounds]).trimEnd());
  process.exit(0);
}

const measured = new Map();
for (let round = 0; round < Number(options.rounds); round++) {
  for (const threads of ["1", "2"]) keep(`ours, ${threads} thread${threads === "1" ? "" : "s"}`, measureOurs(threads));
  for (const { name, arguments: more } of BASELINES) keep(name, measureNumpy(more));
}
report();

function requireNumpy() {
  const found = spawnSync(options.python, ["-c", "import numpy"], { encoding: "utf8" });
  if (found.error) stop(`${options.python} cannot be run: the baseline needs Python 3 (Debian: python3)`);
  if (found.status !== 0) stop(`${options.python} has no numpy: the baseline needs it (Debian: python3-numpy)`);
}

function stop(message) {
  console.error(message);
  process.exit(1);
}

function run(command, more) {
  const environment = { ...process.env };
  // Settings for another processor would slow the baseline's BLAS down.
  delete environment.OPENBLAS_CORETYPE;
  delete environment.OPENBLAS_L2_SIZE;
  const done = spawnSync(command, more, { encoding: "utf8", env: environment, maxBuffer: 2 ** 24 });
  if (done.status !== 0) stop(`${command} ${more.join(" ")} failed:\n${done.stderr}`);
  return done.stdout;
}

function measureOurs(threads) {
  const { runs, peakRss_MiB } = JSON.parse(
    run(process.execPath, [`${folder}/analyse-run.mjs`, file, threads, REPEATS]),
  );
  return runs.map(({ total, ...stages }) => ({ total: total / 1000, stages: inSeconds(stages), peakRss_MiB }));
}

function inSeconds(stages) {
  return Object.fromEntries(Object.entries(stages).map(([name, ms]) => [name, ms / 1000]));
}

function measureNumpy(more) {
  const best = JSON.parse(run(options.python, [baseline, "--time", file, "--repeat", REPEATS, ...more]));
  const stages = { ...best.stages, ...best["inside, summed over processes"] };
  return best["all runs, seconds"].map((total) => ({ total, stages, peakRss_MiB: best["peak RSS MiB"] }));
}

function keep(name, runs) {
  measured.set(name, [...(measured.get(name) ?? []), ...runs]);
}

function median(values) {
  const sorted = [...values].sort((a, b) => a - b);
  return (sorted[Math.floor((sorted.length - 1) / 2)] + sorted[Math.ceil((sorted.length - 1) / 2)]) / 2;
}

function report() {
  console.log(
    `N = ${options.sites}, T = ${options.times}, M = ${options.shots}, B = 1000, all pairs, reference traces`,
  );
  const totals = new Map();
  for (const [name, runs] of measured) {
    const total = median(runs.map((one) => one.total));
    totals.set(name, total);
    const peak = Math.max(...runs.map((one) => one.peakRss_MiB));
    console.log(`\n${name}: ${total.toFixed(3)} s (median of ${runs.length}), peak RSS ${peak} MiB`);
    for (const stage of Object.keys(runs[0].stages)) {
      console.log(`  ${stage.padEnd(20)} ${median(runs.map((one) => one.stages[stage])).toFixed(3)} s`);
    }
  }
  const best = BASELINES.map(({ name }) => name).sort((a, b) => totals.get(a) - totals.get(b))[0];
  console.log(`\nBest baseline: ${best}`);
  for (const [name, total] of totals) {
    if (name.startsWith("ours")) console.log(`${name}: ${(totals.get(best) / total).toFixed(1)} times as fast`);
  }
}
