import type { Browser } from "playwright-core";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { launchBrowser, openPage, PHONE, signInAs, type WatchedPage } from "./browser";

let browser: Browser;
let watched: WatchedPage;
let run: string;

beforeAll(async () => {
  browser = await launchBrowser();
  watched = await openPage(browser);
  await signInAs(watched.page, "analyst");
  run = (await watched.page.getByRole("link", { name: /XY/ }).first().getAttribute("href")) ?? "";
});
afterAll(() => browser.close());

describe("the plots of a run", () => {
  it("read out a cell of the map by pointer and by arrow keys", async () => {
    const { page } = watched;
    await page.goto(`${run}/correlations`, { waitUntil: "networkidle" });
    const map = page.getByRole("img", { name: /^Connected correlators/ });
    const box = await map.boundingBox();
    if (!box) throw new Error("the map is not drawn");
    await page.mouse.move(box.x + box.width / 2, box.y + box.height / 2);
    await page.getByText(/site \d+.*t = .*C = /).first().waitFor();
    await page.mouse.move(0, 0);
    await map.focus();
    await page.keyboard.press("ArrowRight");
    const first = await page.getByText(/t = .* µs: C = /).first().textContent();
    await page.keyboard.press("ArrowRight");
    const second = await page.getByText(/t = .* µs: C = /).first().textContent();
    expect(second).not.toBe(first);
  });

  it("lift the read-out by Escape, and stay where a finger pointed", async () => {
    const { page, context } = await openPage(browser, PHONE, { touch: true });
    await signInAs(page, "reader");
    await page.goto(`${run}/front`, { waitUntil: "networkidle" });
    const map = page.getByRole("img", { name: /^Correlations and front/ });
    const box = await map.boundingBox();
    if (!box) throw new Error("the map is not drawn");
    await page.touchscreen.tap(box.x + box.width / 2, box.y + 60);
    await page.waitForURL(/trace=/);
    await page.getByText(/t = .* µs: C = /).first().waitFor();
    await map.focus();
    await page.keyboard.press("Escape");
    await page.getByText(/t = .* µs: C = /).first().waitFor({ state: "detached" });
    await context.close();
  });

  it("keep the chosen analysis from station to station", async () => {
    const { page } = watched;
    await page.goto(`${run}/front?analysis=1`, { waitUntil: "networkidle" });
    await page.getByRole("link", { name: /Correlations/ }).click();
    await page.waitForURL(/correlations\?analysis=1/);
  });

  it("offer no file where none shows the same picture", async () => {
    const { page } = watched;
    await page.goto(`${run}/correlations?reference=3`, { waitUntil: "networkidle" });
    expect(await page.getByRole("link", { name: "SVG" }).count()).toBe(0);
    const csv = await page.request.get((await page.getByRole("link", { name: "CSV" }).nth(1).getAttribute("href")) ?? "");
    expect(await csv.text()).toContain("site 0");
    await page.goto(`${run}/correlations`, { waitUntil: "networkidle" });
    expect(await page.getByRole("link", { name: "SVG" }).count()).toBe(2);
  });

  it("have a table twin with every value", async () => {
    const { page } = watched;
    await page.goto(`${run}/front`, { waitUntil: "networkidle" });
    await page.getByRole("button", { name: "Table" }).nth(1).click();
    const rows = await page.getByRole("table").filter({ hasText: "status" }).getByRole("row").count();
    expect(rows).toBeGreaterThan(5);
  });

  it("keep their choices in the address, so that a link shows the same picture", async () => {
    const { page } = watched;
    await page.goto(`${run}/correlations`, { waitUntil: "networkidle" });
    await page.getByLabel("Map by").selectOption({ label: "distance, averaged over pairs" });
    await page.getByRole("slider").press("Home");
    await page.waitForURL(/reference=distance/);
    await page.waitForURL(/time=0/);
    await page.goto(page.url(), { waitUntil: "networkidle" });
    expect(await page.getByLabel("Map by").inputValue()).toBe("distance");
    expect(await page.getByRole("slider").inputValue()).toBe("0");
  });

  it("leave as SVG and CSV with parameters and hashes in the head", async () => {
    const { page } = watched;
    await page.goto(`${run}/front`, { waitUntil: "networkidle" });
    const svg = await page.request.get((await page.getByRole("link", { name: "SVG" }).first().getAttribute("href")) ?? "");
    expect(svg.headers()["content-type"]).toContain("image/svg+xml");
    expect(await svg.text()).toMatch(/<metadata>[\s\S]*sha256[\s\S]*seed/i);
    const csv = await page.request.get((await page.getByRole("link", { name: "CSV" }).first().getAttribute("href")) ?? "");
    expect(await csv.text()).toMatch(/^#[\s\S]*[0-9a-f]{64}[\s\S]*\n[^#]/);
  });
});
