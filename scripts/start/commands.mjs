import { spawn } from "node:child_process";
import { ROOT } from "./settings.mjs";

const LAST_LINES = 15;
const running = new Set();
let ended = false;

/** Runs a command to its end and returns what it printed; throws with its last lines when it fails. */
export function runCommand(command, args, { name, environment = process.env }) {
  if (ended) return Promise.reject(new Error(`${name} was not begun: the program is ending`));
  // A group of its own: npm and its children then end together, see endCommands.
  const child = spawn(command, args, { cwd: ROOT, env: environment, stdio: ["ignore", "pipe", "pipe"], detached: true });
  running.add(child);
  const printed = { stdout: "", stderr: "" };
  for (const stream of ["stdout", "stderr"]) child[stream].setEncoding("utf8").on("data", (text) => (printed[stream] += text));
  return new Promise((resolve, reject) => {
    child.once("error", (error) => reject(new Error(`${name} failed: ${error.message}`)));
    child.once("close", (code, signal) => {
      running.delete(child);
      if (code === 0) resolve(printed.stdout);
      else reject(new Error(`${name} failed with ${signal ?? `code ${code}`}\n${lastLinesOf(`${printed.stdout}\n${printed.stderr}`)}`));
    });
  });
}

/** Ends the commands that run now, children included, and lets no other begin. */
export function endCommands() {
  ended = true;
  for (const child of running) {
    try {
      process.kill(-child.pid, "SIGTERM");
    } catch (error) {
      if (error.code !== "ESRCH") throw error;
    }
  }
}

function lastLinesOf(text) {
  return text.trim().split("\n").slice(-LAST_LINES).join("\n");
}
