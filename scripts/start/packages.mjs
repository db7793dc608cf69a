import { createHash } from "node:crypto";
import { existsSync, readFileSync, writeFileSync } from "node:fs";
import path from "node:path";
import { runCommand } from "./commands.mjs";
import { ROOT } from "./settings.mjs";

const MARK = path.join(ROOT, "node_modules", ".strandline-lock");

/** Installs the npm packages from the lock file when they are missing or the lock has changed since. */
export async function ensureNpmPackages() {
  const lock = createHash("sha256").update(readFileSync(path.join(ROOT, "package-lock.json"))).digest("hex");
  if (existsSync(MARK) && readFileSync(MARK, "utf8") === lock) return;
  console.log("Installing packages from the lock file …");
  // The build needs the development packages, whatever NODE_ENV says.
  await runCommand("npm", ["ci", "--include=dev", "--no-audit", "--no-fund", "--loglevel=error"], { name: "npm ci" });
  writeFileSync(MARK, lock);
}

/** Installs Debian packages whose program is missing; says plainly what to do when that is not possible here. */
export async function ensureDebianPackages(wanted) {
  const missing = wanted.filter(({ program }) => !isInstalled(program)).map(({ name }) => name);
  if (missing.length === 0) return;
  if (process.getuid?.() !== 0 || !isInstalled("apt-get")) {
    throw new Error(`${missing.join(", ")} must be installed first (as root: apt-get install ${missing.join(" ")})`);
  }
  console.log(`Installing ${missing.join(", ")} from Debian …`);
  const environment = { ...process.env, DEBIAN_FRONTEND: "noninteractive" };
  await runCommand("apt-get", ["update", "-qq"], { name: "apt-get update", environment });
  await runCommand("apt-get", ["install", "-y", "-qq", "--no-install-recommends", ...missing], { name: "apt-get install", environment });
}

function isInstalled(program) {
  const places = [...(process.env.PATH ?? "").split(":"), "/usr/sbin", "/usr/bin"];
  return places.some((place) => existsSync(path.join(place, program)));
}
