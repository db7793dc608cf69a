import { spawn } from "node:child_process";
import { closeSync, mkdirSync, openSync } from "node:fs";
import path from "node:path";
import { setTimeout as sleep } from "node:timers/promises";
import { runCommand } from "./commands.mjs";
import { lastLines } from "./database.mjs";
import { ROOT } from "./settings.mjs";

const STOP_MS = 20_000;
const MOST_BACK_OFF_MS = 30_000;
const STEADY_MS = 60_000;

/**
 * Starts a part of the program as a process of its own group with its own log. Parts notice by the closed channel when the
 * starting process is gone, and end themselves.
 */
export function startPart({ name, file, environment, dataDirectory }) {
  mkdirSync(path.join(dataDirectory, "logs"), { recursive: true });
  const log = path.join(dataDirectory, "logs", `${name.replaceAll(" ", "-")}.log`);
  const output = openSync(log, "a");
  const child = spawn(process.execPath, ["--enable-source-maps", path.join(ROOT, file)], {
    cwd: ROOT,
    env: { ...process.env, ...environment },
    stdio: ["ignore", output, output, "ipc"],
    detached: true,
  });
  closeSync(output);
  return { name, child, log };
}

/** Keeps a worker running: one that ends by itself is reported and started again, after a pause that grows. */
export function keepWorker(start, isStopping, report) {
  const kept = { part: null };
  let backOff_ms = 500;
  const begin = () => {
    const began = Date.now();
    kept.part = start();
    kept.part.child.once("exit", (code, signal) => {
      if (isStopping()) return;
      backOff_ms = Date.now() - began > STEADY_MS ? 500 : Math.min(MOST_BACK_OFF_MS, 2 * backOff_ms);
      report(`${endOf(kept.part, code, signal)}\nIt is started again in ${backOff_ms / 1000} s.`);
      setTimeout(() => !isStopping() && begin(), backOff_ms);
    });
  };
  begin();
  return kept;
}

/** Says by name how a part ended, with the end of its log. */
export function endOf(part, code, signal) {
  return `The ${part.name} ended with ${signal ?? `code ${code}`}. The end of ${part.log}:\n${lastLines(part.log, 12)}`;
}

/** Asks a part to end, and ends it when it does not. */
export async function stopPart(part) {
  if (!part || hasEnded(part.child)) return;
  part.child.kill("SIGTERM");
  const deadline = Date.now() + STOP_MS;
  while (!hasEnded(part.child) && Date.now() < deadline) await sleep(30);
  if (!hasEnded(part.child)) part.child.kill("SIGKILL");
}

function hasEnded(child) {
  return child.exitCode !== null || child.signalCode !== null;
}

/** Migrates and seeds; returns what the prepare step says, such as a one-time set-up key. */
export async function prepareDatabase(environment) {
  const printed = await runCommand(process.execPath, [path.join(ROOT, ".next/worker/prepare.mjs")], {
    name: "preparing the database",
    environment: { ...process.env, ...environment },
    // A demo that is half made would stay so: the database is no longer empty then.
    mayFinish: true,
  });
  return JSON.parse(printed.trim().split("\n").at(-1));
}

/** Waits until the health answer is 200; throws with the last answer when it takes longer than a minute. */
export async function untilHealthy(address, hasFailed) {
  const deadline = Date.now() + 60_000;
  let last = "no answer";
  while (Date.now() < deadline && !hasFailed()) {
    const answer = await fetch(`${address}/api/v1/health`, { signal: AbortSignal.timeout(10_000) }).catch((error) => ({ ok: false, text: async () => error.message }));
    if (answer.ok) return;
    last = await answer.text();
    await sleep(150);
  }
  if (!hasFailed()) throw new Error(`it does not get healthy: ${last}`);
}
