import { readFileSync } from "node:fs";
import type { Browser } from "playwright-core";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { launchBrowser, openPage, signInAs, type WatchedPage } from "./browser";

let browser: Browser;
let watched: WatchedPage;

beforeAll(async () => {
  browser = await launchBrowser();
  watched = await openPage(browser);
  await signInAs(watched.page, "analyst");
});
afterAll(() => browser.close());

describe("a new run", () => {
  it("goes from a dropped archive to a saved detection and a fitted front", async () => {
    const { page, faults } = watched;
    await page.goto("/runs/new");
    await page.locator('input[type="file"]').setInputFiles("tests/fixtures/runs/xy-chain-12/shots.npz");
    await page.getByLabel("Title").fill("Browser night");
    await page.getByRole("button", { name: "Create the run and read it" }).click();
    await page.waitForURL(/\/runs\/[0-9a-f]{24}\/shots/);
    await page.getByText("45\u202f000").first().waitFor({ timeout: 60_000 });
    await page.getByRole("link", { name: /Detection/ }).click();
    await page.getByRole("button", { name: "Save detection" }).click();
    await page.getByRole("heading", { name: /Detection 1/ }).waitFor();
    await page.getByRole("link", { name: /Front/ }).click();
    await page.getByLabel("Bootstrap replicates B").fill("200");
    await page.getByRole("button", { name: "Analyse" }).click();
    await page.getByText(/Faster than linear/).first().waitFor({ timeout: 60_000 });
    expect(faults).toEqual([]);
  });

  it("asks for the times an NPY file does not hold before anything is sent", async () => {
    const { page } = watched;
    await page.goto("/runs/new");
    await page.locator('input[type="file"]').setInputFiles({ name: "night.npy", mimeType: "application/octet-stream", buffer: Buffer.from("NUMPY") });
    await page.getByRole("button", { name: "Create the run and read it" }).click();
    expect(await page.getByLabel(/Evolution times/).evaluate((field: HTMLInputElement) => field.validity.valueMissing)).toBe(true);
    expect(new URL(page.url()).pathname).toBe("/runs/new");
  });

  it("is refused with the place named when the archive is broken, and nothing else is lost", async () => {
    const { page } = watched;
    await page.goto("/runs/new");
    await page.locator('input[type="file"]').setInputFiles({ name: "letters.csv", mimeType: "text/csv", buffer: readFileSync("tests/fixtures/malformed/letters.csv") });
    await page.getByLabel("Title").fill("Broken night");
    await page.getByRole("button", { name: "Create the run and read it" }).click();
    await page.getByText("letters.csv line 32 column site_2").first().waitFor({ timeout: 60_000 });
    expect(await page.getByRole("button", { name: "Choose files" }).isVisible()).toBe(true);
  });
});
