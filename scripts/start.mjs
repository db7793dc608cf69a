import { mkdirSync } from "node:fs";
import { ensureBuild, ensureWorkerBundle } from "./start/build.mjs";
import { endCommands } from "./start/commands.mjs";
import { DATABASE_PACKAGES, privateDatabase } from "./start/database.mjs";
import { holdDataDirectory } from "./start/hold.mjs";
import { ensureDebianPackages, ensureNpmPackages } from "./start/packages.mjs";
import { whenNpmEnds } from "./start/parent.mjs";
import { endOf, keepWorker, prepareDatabase, startPart, stopPart, untilHealthy } from "./start/parts.mjs";
import { readSecrets } from "./start/secrets.mjs";
import { readSettings } from "./start/settings.mjs";

let stopping = false;
let giveBack = () => undefined;
const running = { database: null, web: null, workers: [] };

async function start() {
  const settings = readSettings(process.env);
  const development = process.argv.includes("--dev");
  mkdirSync(settings.dataDirectory, { recursive: true, mode: 0o700 });
  giveBack = holdDataDirectory(settings.dataDirectory);
  await ensureNpmPackages();
  const secrets = readSecrets(settings.dataDirectory);
  const databaseUrl = settings.databaseUrl ?? (await ownDatabase(settings, secrets));
  await (development ? ensureWorkerBundle() : ensureBuild());
  const address = `http://${settings.host.includes(":") ? `[${settings.host}]` : settings.host}:${settings.port}`;
  const environment = {
    NODE_ENV: development ? "development" : "production",
    NEXT_TELEMETRY_DISABLED: "1",
    DATABASE_URL: databaseUrl,
    STRANDLINE_SESSION_SECRET: secrets.session,
    STRANDLINE_DEMO: settings.demo ? "1" : "0",
    STRANDLINE_DEMO_PASSWORD: settings.demoPassword,
    HOST: settings.host,
    PORT: String(settings.port),
    PUBLIC_URL: settings.publicUrl ?? address,
  };
  const prepared = await prepareDatabase(environment);
  if (stopping) return;
  startWeb(environment, settings);
  for (let number = 1; number <= settings.workers; number++) {
    running.workers.push(keepWorker(() => startPart({ name: `worker ${number}`, file: ".next/worker/main.mjs", environment, dataDirectory: settings.dataDirectory }), () => stopping, (text) => console.error(text)));
  }
  await untilHealthy(address, () => stopping);
  if (!stopping) console.log(welcome(settings, settings.publicUrl ?? address, prepared));
}

async function ownDatabase(settings, secrets) {
  await ensureDebianPackages(DATABASE_PACKAGES);
  running.database = privateDatabase(settings.dataDirectory);
  return running.database.start(secrets.database, (code, signal) => fail(running.database, code, signal));
}

function startWeb(environment, settings) {
  running.web = startPart({ name: "web server", file: "scripts/server.mjs", environment, dataDirectory: settings.dataDirectory });
  running.web.child.once("exit", (code, signal) => fail(running.web, code, signal));
}

/** Web and database cannot be missed: their end is the end of all. */
function fail(part, code, signal) {
  if (stopping) return;
  console.error(endOf(part, code, signal));
  void stop(1);
}

async function stop(code) {
  if (stopping) return;
  stopping = true;
  await endCommands();
  await Promise.all([stopPart(running.web), ...running.workers.map((kept) => stopPart(kept.part))]);
  await running.database?.stop();
  giveBack();
  process.exit(code);
}

function welcome(settings, address, prepared) {
  if (prepared.setupKey) return `\nStrandline is ready. Set it up once at\n\n  ${address}/setup?key=${prepared.setupKey}\n\nCtrl-C ends it.`;
  const lines = ["", "Strandline is ready at", "", `  ${address}`, ""];
  if (settings.demo && prepared.demo) {
    lines.push(`Demo sign-ins, password ${settings.demoPassword}:`);
    for (const role of ["owner", "analyst", "contributor", "reader"]) lines.push(`  ${role}@demo.example`);
    lines.push("");
  }
  return [...lines, "Ctrl-C ends it."].join("\n");
}

for (const signal of ["SIGINT", "SIGTERM", "SIGHUP"]) process.on(signal, () => void stop(0));
whenNpmEnds(() => void stop(0));
start().catch((error) => {
  if (stopping) return;
  console.error(`Strandline did not start: ${error.message}`);
  void stop(1);
});
