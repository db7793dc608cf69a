import { spawn } from "node:child_process";
import { setTimeout as sleep } from "node:timers/promises";
import { ROOT } from "./settings.mjs";

const LAST_LINES = 15;
const LONGEST_END_MS = 15_000;
/** `{child, mayFinish, closed}` of each command that runs now. */
const running = new Set();
let ended = false;

/**
 * Runs a command to its end and returns what it printed; throws with its last lines when it fails. One that `mayFinish` is
 * waited for when the program ends, not broken off in the middle.
 */
export function runCommand(command, args, { name, environment = process.env, mayFinish = false }) {
  if (ended) return Promise.reject(new Error(`${name} was not begun: the program is ending`));
  // A group of its own: npm and its children then end together, and Ctrl-C reaches them through endCommands only.
  const child = spawn(command, args, { cwd: ROOT, env: environment, stdio: ["ignore", "pipe", "pipe"], detached: true });
  const printed = { stdout: "", stderr: "" };
  for (const stream of ["stdout", "stderr"]) child[stream].setEncoding("utf8").on("data", (text) => (printed[stream] += text));
  const closed = new Promise((resolve) => child.once("close", (code, signal) => resolve({ code, signal })));
  const entry = { child, mayFinish, closed };
  running.add(entry);
  return new Promise((resolve, reject) => {
    child.once("error", (error) => reject(new Error(`${name} failed: ${error.message}`)));
    void closed.then(({ code, signal }) => {
      running.delete(entry);
      if (code === 0) resolve(printed.stdout);
      else reject(new Error(`${name} failed with ${signal ?? `code ${code}`}\n${lastLinesOf(`${printed.stdout}\n${printed.stderr}`)}`));
    });
  });
}

/** Ends the commands that run now, children included, lets no other begin, and resolves when they are gone. */
export async function endCommands() {
  ended = true;
  for (const { child, mayFinish } of running) {
    if (!mayFinish) endGroup(child.pid);
  }
  await Promise.race([Promise.all(Array.from(running, ({ closed }) => closed)), sleep(LONGEST_END_MS, undefined, { ref: false })]);
}

function endGroup(pid) {
  try {
    process.kill(-pid, "SIGTERM");
  } catch (error) {
    if (error.code !== "ESRCH") throw error;
  }
}

function lastLinesOf(text) {
  return text.trim().split("\n").slice(-LAST_LINES).join("\n");
}
