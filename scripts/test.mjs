import { spawn } from "node:child_process";
import { mkdtempSync, rmSync } from "node:fs";
import os from "node:os";
import path from "node:path";
import { ensureBuild } from "./start/build.mjs";
import { endCommands } from "./start/commands.mjs";
import { DATABASE_PACKAGES, freePort, privateDatabase } from "./start/database.mjs";
import { ensureDebianPackages, ensureNpmPackages } from "./start/packages.mjs";
import { whenNpmEnds } from "./start/parent.mjs";
import { endOf, prepareDatabase, startPart, stopPart, untilHealthy } from "./start/parts.mjs";
import { ROOT } from "./start/settings.mjs";

const dataDirectory = mkdtempSync(path.join(os.tmpdir(), "strandline-test-"));
const running = { database: privateDatabase(dataDirectory), web: null, worker: null, tests: null };

let cleaning = false;

/** Runs all tests against a throw-away database with the demo in it, a real web server and a real worker. */
async function test() {
  await ensureNpmPackages();
  await ensureDebianPackages([...DATABASE_PACKAGES, { program: "chromium", name: "chromium" }]);
  await ensureBuild();
  const databaseUrl = await running.database.start("throw-away", (code, signal) => console.error(endOf(running.database, code, signal)));
  const port = await freePort();
  const address = `http://127.0.0.1:${port}`;
  const environment = {
    NODE_ENV: "production",
    DATABASE_URL: databaseUrl,
    STRANDLINE_SESSION_SECRET: "a secret for tests that guards nothing at all",
    STRANDLINE_DEMO: "1",
    STRANDLINE_DEMO_PASSWORD: "low-tide-demo",
    HOST: "127.0.0.1",
    PORT: String(port),
    PUBLIC_URL: address,
  };
  await prepareDatabase(environment);
  running.web = startReported({ name: "web server", file: "scripts/server.mjs", environment, dataDirectory });
  running.worker = startReported({ name: "worker 1", file: ".next/worker/main.mjs", environment, dataDirectory });
  await untilHealthy(address, () => false);
  return runVitest({ ...environment, NODE_ENV: "test", STRANDLINE_TEST_URL: address, NO_COLOR: "1" });
}

/** The logs go with the throw-away directory: what a part said before it ended by itself is shown at once. */
function startReported(part) {
  const started = startPart(part);
  started.child.once("exit", (code, signal) => !cleaning && console.error(endOf(started, code, signal)));
  return started;
}

function runVitest(environment) {
  const reporters = ["--reporter=default", `--reporter=${path.join(ROOT, "scripts/closing-line-reporter.mjs")}`];
  running.tests = spawn(process.execPath, [path.join(ROOT, "node_modules/vitest/vitest.mjs"), "run", ...reporters, ...process.argv.slice(2)], {
    cwd: ROOT,
    env: { ...process.env, ...environment },
    stdio: ["ignore", "inherit", "inherit"],
  });
  return new Promise((resolve) => running.tests.once("exit", (code) => resolve(code ?? 1)));
}

async function cleanUp() {
  cleaning = true;
  await endCommands();
  running.tests?.kill("SIGTERM");
  await Promise.all([stopPart(running.web), stopPart(running.worker)]);
  await running.database.stop();
  rmSync(dataDirectory, { recursive: true, force: true });
}

function giveUp() {
  if (!cleaning) void cleanUp().then(() => process.exit(130));
}

for (const signal of ["SIGINT", "SIGTERM", "SIGHUP"]) process.on(signal, giveUp);
whenNpmEnds(giveUp);
const code = await test().catch((error) => {
  if (!cleaning) console.error(error.message);
  return 1;
});
if (!cleaning) await cleanUp().then(() => process.exit(code));
