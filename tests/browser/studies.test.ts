import type { Browser } from "playwright-core";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { accessibilityFaults, launchBrowser, openPage, PHONE, signInAs, type WatchedPage } from "./browser";

/** Simulated runs on two busy cores. */
const PATIENCE_MS = 120_000;

let browser: Browser;
let watched: WatchedPage;
let front: string;

beforeAll(async () => {
  browser = await launchBrowser();
  watched = await openPage(browser);
  await signInAs(watched.page, "analyst");
  front = `${(await watched.page.getByRole("link", { name: /XY/ }).first().getAttribute("href")) ?? ""}/front`;
});
afterAll(() => browser.close());

describe("the questions below the front", () => {
  it(
    "are asked by a button, followed while they run and answered in a sentence",
    async () => {
      const { page, faults } = watched;
      await page.goto(front, { waitUntil: "networkidle" });
      await page.getByRole("button", { name: "Vary the choices" }).click();
      await page.getByText(/combinations of choices it lies between/).waitFor({ timeout: PATIENCE_MS });
      const nearest = page.getByRole("region", { name: "Nearest-neighbour comparison" });
      await nearest.getByText("How it is simulated").click();
      await nearest.getByLabel("Simulated runs").fill("20");
      await nearest.getByRole("button", { name: "Compare" }).click();
      await nearest.getByText(/nearest-neighbour cone: /).waitFor({ timeout: PATIENCE_MS });
      const itself = page.getByRole("region", { name: "Self-test" });
      await itself.getByText("How it is simulated").click();
      await itself.getByLabel("Simulated runs").fill("20");
      await itself.getByRole("button", { name: "Test this analysis" }).click();
      await itself.getByRole("region", { name: "Bias and coverage" }).waitFor({ timeout: PATIENCE_MS });
      expect(faults).toEqual([]);
    },
    3 * PATIENCE_MS,
  );

  it("show what is refused at its place", async () => {
    const { page, faults } = watched;
    const nearest = page.getByRole("region", { name: "Nearest-neighbour comparison" });
    await nearest.getByText("How it is simulated").click();
    await nearest.getByLabel("Simulated runs", { exact: true }).fill("3");
    await nearest.getByRole("button", { name: "Compare again" }).click();
    await nearest.getByRole("alert").filter({ hasText: "repeats" }).waitFor();
    faults.length = 0;
  });

  it("read out each combination by arrow keys", async () => {
    const { page } = watched;
    const plot = page.getByRole("img", { name: /combinations of choices/ });
    await plot.focus();
    await page.keyboard.press("ArrowDown");
    await page.getByText(/^as saved: β = /).waitFor();
  });

  it("are as accessible as the rest", async () => {
    expect(await accessibilityFaults(watched.page)).toEqual([]);
  });

  it("fit a phone, and offer a reader no button", async () => {
    const { page, context } = await openPage(browser, PHONE);
    await signInAs(page, "reader");
    await page.goto(front, { waitUntil: "networkidle" });
    await page.getByText(/combinations of choices it lies between/).waitFor();
    expect(await page.evaluate(() => document.documentElement.scrollWidth)).toBeLessThanOrEqual(PHONE.width);
    expect(await page.getByRole("button", { name: /Compare|Test again|Vary/ }).count()).toBe(0);
    await context.close();
  });
});
