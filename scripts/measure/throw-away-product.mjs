import { mkdtempSync, rmSync } from "node:fs";
import os from "node:os";
import path from "node:path";
import { ensureBuild } from "../start/build.mjs";
import { endCommands } from "../start/commands.mjs";
import { DATABASE_PACKAGES, freePort, privateDatabase } from "../start/database.mjs";
import { ensureDebianPackages, ensureNpmPackages } from "../start/packages.mjs";
import { endOf, prepareDatabase, startPart, stopPart, untilHealthy } from "../start/parts.mjs";

const DEMO_PASSWORD = "low-tide-demo";

/**
 * Runs `measure` against the whole product over a database of its own, with `environment` on top of the usual settings, and
 * takes everything away afterwards, also when it is interrupted.
 */
export async function withThrowAwayProduct(environment, measure) {
  const directory = mkdtempSync(path.join(os.tmpdir(), "strandline-measure-"));
  const database = privateDatabase(directory);
  const parts = [];
  const cleanUp = async () => {
    await Promise.all(parts.map(stopPart));
    await database.stop();
    rmSync(directory, { recursive: true, force: true });
  };
  for (const signal of ["SIGINT", "SIGTERM", "SIGHUP"]) process.once(signal, () => void endCommands().then(cleanUp).then(() => process.exit(130)));
  try {
    return await measure(await startProduct({ directory, database, parts, environment }));
  } finally {
    await cleanUp();
  }
}

async function startProduct({ directory, database, parts, environment }) {
  await ensureNpmPackages();
  await ensureDebianPackages(DATABASE_PACKAGES);
  await ensureBuild();
  const databaseUrl = await database.start("throw-away", (code, signal) => console.error(endOf(database, code, signal)));
  const port = await freePort();
  const address = `http://127.0.0.1:${port}`;
  const settings = {
    NODE_ENV: "production",
    DATABASE_URL: databaseUrl,
    STRANDLINE_SESSION_SECRET: "a secret for measurements that guards nothing",
    STRANDLINE_DEMO: "1",
    STRANDLINE_DEMO_PASSWORD: DEMO_PASSWORD,
    HOST: "127.0.0.1",
    PORT: String(port),
    PUBLIC_URL: address,
    ...environment,
  };
  await prepareDatabase(settings);
  const web = startPart({ name: "web server", file: "scripts/server.mjs", environment: settings, dataDirectory: directory });
  const worker = startPart({ name: "worker 1", file: ".next/worker/main.mjs", environment: settings, dataDirectory: directory });
  parts.push(web, worker);
  await untilHealthy(address, () => false);
  return { address, directory, databaseUrl, webPid: web.child.pid, workerPid: worker.child.pid, call: await signedInCaller(address) };
}

/** Returns a function that calls the API as the demo's analyst and answers the JSON; throws with the problem when refused. */
async function signedInCaller(address) {
  const json = { email: "analyst@demo.example", password: DEMO_PASSWORD };
  const session = await fetch(`${address}/api/v1/session`, { method: "POST", headers: { "content-type": "application/json" }, body: JSON.stringify(json) });
  const cookie = session.headers.getSetCookie().map((text) => text.split(";")[0]).join("; ");
  const call = async (method, place, json) => {
    const headers = { cookie, ...(json && { "content-type": "application/json" }) };
    const answer = await fetch(address + place, { method, headers, body: json && JSON.stringify(json) });
    const text = await answer.text();
    if (!answer.ok) throw new Error(`${method} ${place} answered ${answer.status}: ${text}`);
    return text === "" ? null : JSON.parse(text);
  };
  return Object.assign(call, { cookie });
}
