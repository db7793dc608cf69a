import { spawn, spawnSync } from "node:child_process";
import { existsSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import os from "node:os";
import path from "node:path";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { holdDataDirectory } from "../../scripts/start/hold.mjs";

let directory = "";
beforeEach(() => {
  directory = mkdtempSync(path.join(os.tmpdir(), "strandline-hold-"));
});
afterEach(() => rmSync(directory, { recursive: true }));

const pidFile = () => path.join(directory, "start.pid");

/** Holds the directory in a process of its own, which then waits, or is gone with nothing given back. */
const holding = (thenWait: boolean) => [
  "--input-type=module",
  "--eval",
  `import { holdDataDirectory } from ${JSON.stringify(path.resolve("scripts/start/hold.mjs"))};
   holdDataDirectory(${JSON.stringify(directory)});
   console.log("held");
   ${thenWait ? "setInterval(() => {}, 1000);" : ""}`,
];

describe("a data directory", () => {
  it("is refused while another start holds it, who is named", async () => {
    const other = spawn(process.execPath, holding(true), { stdio: ["ignore", "pipe", "inherit"] });
    await new Promise((resolve) => other.stdout.once("data", resolve));
    try {
      expect(() => holdDataDirectory(directory)).toThrow(`process ${other.pid}`);
      expect(readFileSync(pidFile(), "utf8")).toContain(`${other.pid} `);
    } finally {
      other.kill("SIGKILL");
    }
  });

  it("is taken over from a start that crashed", () => {
    expect(spawnSync(process.execPath, holding(false)).status).toBe(0);
    expect(existsSync(pidFile())).toBe(true);
    const giveBack = holdDataDirectory(directory);
    expect(readFileSync(pidFile(), "utf8")).toContain(`${process.pid} `);
    giveBack();
    expect(existsSync(pidFile())).toBe(false);
  });

  it("is not taken for held when the number belongs to another process by now", () => {
    writeFileSync(pidFile(), `${process.pid} 1`);
    expect(() => holdDataDirectory(directory)()).not.toThrow();
  });
});
