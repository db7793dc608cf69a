import { fileURLToPath } from "node:url";
import { build } from "esbuild";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import type { Browser } from "playwright-core";
import { launchBrowser } from "./browser";
import { simulatedTime } from "./worker-thread";

const root = fileURLToPath(new URL("../..", import.meta.url));

let browser: Browser;
let script: string;

beforeAll(async () => {
  browser = await launchBrowser();
  const built = await build({
    stdin: {
      contents: `import { simulatedTime } from "./worker-thread"; onmessage = ({ data }) => postMessage(simulatedTime(data));`,
      resolveDir: `${root}tests/browser`,
      loader: "ts",
    },
    bundle: true,
    write: false,
    format: "iife",
    target: "es2022",
    alias: { "@": root.replace(/\/$/, "") },
  });
  script = built.outputFiles[0].text;
});
afterAll(() => browser.close());

/** What a worker of the browser posts back. */
async function inBrowserWorker(replicates: number): Promise<Record<string, string>> {
  const page = await browser.newPage();
  try {
    return await page.evaluate(
      ([source, count]) =>
        new Promise<Record<string, string>>((resolve, reject) => {
          const worker = new Worker(URL.createObjectURL(new Blob([source], { type: "text/javascript" })));
          worker.onmessage = ({ data }) => resolve(data);
          worker.onerror = ({ message }) => reject(new Error(message));
          worker.postMessage(count);
        }),
      [script, replicates] as const,
    );
  } finally {
    await page.close();
  }
}

describe("the science in a worker of the browser", () => {
  it("gives a preview with the same bytes as the server", async () => {
    const here = simulatedTime(0);
    expect(here.value.length).toBe(2 * 8 * 45);
    expect(await inBrowserWorker(0)).toEqual(here);
  });

  // Engines of different versions round exp and log differently in the last digit; p-values and interval ends need them.
  it("gives the replicates and errors of the bootstrap with the same bytes as the server", async () => {
    const here = simulatedTime(300);
    const there = await inBrowserWorker(300);
    expect(new Set(here.traceReplicates.match(/.{16}/g)).size).toBeGreaterThan(1000);
    for (const name of ["value", "error", "meanError", "traceError", "traceReplicates"]) expect(there[name]).toBe(here[name]);
  });
});
