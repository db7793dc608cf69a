import { spawnSync } from "node:child_process";
import { existsSync, mkdtempSync, readFileSync, rmSync } from "node:fs";
import os from "node:os";
import path from "node:path";
import { ensureNpmPackages } from "./start/packages.mjs";
import { ROOT } from "./start/settings.mjs";

/** The checks beside the tests; the import-direction rule is part of lint. */
const CHECKS = [
  { name: "types", args: ["run", "--silent", "typecheck"], first: ["exec", "next", "typegen"] },
  { name: "lint", args: ["run", "--silent", "lint"] },
  { name: "build", args: ["run", "--silent", "build"] },
];

const scratch = mkdtempSync(path.join(os.tmpdir(), "strandline-ci-"));
const total = { passed: 0, failed: 0 };

await ensureNpmPackages();
for (const check of CHECKS) {
  if (check.first) npm(check.first);
  count(check.name, npm(check.args));
}
runTests();
rmSync(scratch, { recursive: true, force: true });
console.log(`${total.passed} passed, ${total.failed} failed`);
process.exit(total.failed === 0 ? 0 : 1);

function runTests() {
  const counts = path.join(scratch, "counts.json");
  const passed = npm(["test"], { STRANDLINE_TEST_COUNTS: counts });
  const tests = existsSync(counts) ? JSON.parse(readFileSync(counts, "utf8")) : { passed: 0, failed: 1 };
  total.passed += tests.passed;
  total.failed += passed ? tests.failed : Math.max(1, tests.failed);
}

function count(name, passed) {
  console.log(`${name}: ${passed ? "passed" : "FAILED"}`);
  total[passed ? "passed" : "failed"] += 1;
}

function npm(args, environment = {}) {
  console.log(`\n— npm ${args.join(" ")}`);
  return spawnSync("npm", args, { cwd: ROOT, stdio: ["ignore", "inherit", "inherit"], env: { ...process.env, ...environment, NO_COLOR: "1", NEXT_TELEMETRY_DISABLED: "1" } }).status === 0;
}
