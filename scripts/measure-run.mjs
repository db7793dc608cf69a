/**
 * `node scripts/measure-run.mjs`: reads and analyses one surrogate run through the whole product with one and two threads;
 * prints the seconds from start to finish of each job, and the worker's resident memory. Options: --sites 16 --times 40
 * --shots 4000 --replicates 1000 --rounds 3. Needs Python 3 with numpy, which makes the run.
 */
import { spawnSync } from "node:child_process";
import { existsSync, mkdirSync, readFileSync } from "node:fs";
import path from "node:path";
import { setTimeout as sleep } from "node:timers/promises";
import { parseArgs } from "node:util";
import mysql from "mysql2/promise";
import { residentBytes, watchMemory } from "./measure/resident-memory.mjs";
import { withThrowAwayProduct } from "./measure/throw-away-product.mjs";
import { ROOT } from "./start/settings.mjs";

const { values: options } = parseArgs({
  options: {
    sites: { type: "string", default: "16" },
    times: { type: "string", default: "40" },
    shots: { type: "string", default: "4000" },
    replicates: { type: "string", default: "1000" },
    rounds: { type: "string", default: "3" },
  },
});

const bytes = readFileSync(surrogateRun());
const measured = {};
for (const threads of ["1", "2"]) {
  await withThrowAwayProduct({ STRANDLINE_THREADS: threads }, async (product) => {
    for (let round = 1; round <= Number(options.rounds); round++) measured[`${threads} threads, round ${round}`] = await measureRound(product, round);
  });
}
console.table(measured);

function surrogateRun() {
  const folder = path.join(ROOT, ".data", "bench");
  mkdirSync(folder, { recursive: true });
  const { sites, times, shots } = options;
  const file = path.join(folder, `run-${sites}-${times}-${shots}.npz`);
  if (existsSync(file)) return file;
  const made = spawnSync("python3", [path.join(ROOT, "scripts/bench/baseline_numpy.py"), "--make", sites, times, shots, file], { stdio: "inherit" });
  if (made.status !== 0) throw new Error("the surrogate run could not be made: Python 3 with numpy is needed (Debian: python3-numpy)");
  return file;
}

async function measureRound({ address, databaseUrl, workerPid, call }, round) {
  const idle_MiB = Math.round(residentBytes(workerPid) / 2 ** 20);
  const memory = watchMemory({ worker: workerPid });
  const { id: runId } = await call("POST", "/api/v1/runs", { title: `Round ${round}` });
  const sent = await fetch(`${address}/api/v1/runs/${runId}/archives?filename=shots.npz`, { method: "POST", headers: { cookie: call.cookie }, body: bytes });
  const reading = await jobSeconds(databaseUrl, call, (await sent.json()).job.id);
  const { id: detectionId } = await call("POST", `/api/v1/runs/${runId}/detections`, { method: "fixed", threshold: 4.5 });
  const wish = { detectionId, bootstrap: { replicates: Number(options.replicates), seed: round } };
  const { job } = await call("POST", `/api/v1/runs/${runId}/analyses`, wish);
  const analysis = await jobSeconds(databaseUrl, call, job.id);
  return { "reading (s)": reading, "analysis (s)": analysis, "worker idle (MiB)": idle_MiB, "worker peak (MiB)": memory.stop().worker };
}

/** Waits for a job's end and returns how long it took, by its own row. */
async function jobSeconds(databaseUrl, call, jobId) {
  let job = await call("GET", `/api/v1/jobs/${jobId}`);
  for (; job.state === "queued" || job.state === "running"; job = await call("GET", `/api/v1/jobs/${jobId}`)) await sleep(100);
  if (job.state !== "done") throw new Error(`the job ended ${job.state}: ${job.error?.detail}`);
  const connection = await mysql.createConnection({ uri: databaseUrl, timezone: "Z" });
  const [[row]] = await connection.query("SELECT started_at, finished_at FROM jobs WHERE id = ?", [jobId]);
  await connection.end();
  return (row.finished_at - row.started_at) / 1000;
}
