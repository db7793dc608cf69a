import type { Browser, Page } from "playwright-core";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { accessibilityFaults, DESK, launchBrowser, layoutShift, openPage, PHONE, signInAs, type WatchedPage } from "./browser";

const STATIONS = ["shots", "detection", "correlations", "front"] as const;

let browser: Browser;

beforeAll(async () => {
  browser = await launchBrowser();
});
afterAll(() => browser.close());

async function demoRun({ page }: WatchedPage): Promise<string> {
  await page.goto("/runs");
  const link = page.getByRole("link", { name: /XY/ }).first();
  const href = await link.getAttribute("href");
  if (!href) throw new Error("the demo run has no link");
  return href;
}

function sidewaysScroll(page: Page): Promise<number> {
  return page.evaluate(() => document.documentElement.scrollWidth - document.documentElement.clientWidth);
}

describe("a newcomer", () => {
  it("sees a finished front within a minute of signing in", async () => {
    const watched = await openPage(browser);
    const started = Date.now();
    await signInAs(watched.page, "reader");
    await watched.page.goto(`${await demoRun(watched)}/front`);
    await watched.page.getByText(/linear( within this window)?: β =|Not distinguishable/i).first().waitFor();
    expect(Date.now() - started).toBeLessThan(60_000);
    expect(watched.faults).toEqual([]);
    await watched.context.close();
  });

  it("is led to the sign-in page and back to where they wanted to be", async () => {
    const { page, context } = await openPage(browser);
    await page.goto("/account");
    expect(new URL(page.url()).pathname).toBe("/sign-in");
    await page.getByLabel("Mail address").fill("reader@demo.example");
    await page.getByLabel("Password").fill("not the password");
    await page.getByRole("button", { name: "Sign in" }).click();
    await page.getByText("Mail address or password is wrong.").waitFor();
    expect(await page.getByLabel("Mail address").inputValue()).toBe("reader@demo.example");
    await page.getByLabel("Password").fill("low-tide-demo");
    await page.getByRole("button", { name: "Sign in" }).click();
    await page.waitForURL("**/account");
    await context.close();
  });
});

describe.each([
  { name: "desk, paper", view: DESK },
  { name: "desk, night", view: { ...DESK, theme: "night" as const } },
  { name: "phone, paper", view: PHONE },
  { name: "phone, night", view: { ...PHONE, theme: "night" as const } },
])("every page ($name)", ({ view }) => {
  let watched: WatchedPage;
  let run: string;

  beforeAll(async () => {
    watched = await openPage(browser, view);
    await signInAs(watched.page, "analyst");
    run = await demoRun(watched);
  });
  afterAll(() => watched.context.close());

  it.each([
    { name: "signed out, the sign-in page", path: "/sign-in", signedIn: false },
    { name: "signed out, the set-up page", path: "/setup?key=unknown", signedIn: false },
    { name: "a run that is not there", path: "/runs/0123456789abcdef01234567/front", signedIn: true },
    { name: "an address that is not there", path: "/nowhere", signedIn: true },
  ])("$name: no violation, no layout shift, no sideways scroll", async ({ path, signedIn }) => {
    const stranger = signedIn ? null : await openPage(browser, view);
    const { page } = stranger ?? watched;
    await page.goto(path, { waitUntil: "networkidle" });
    expect(await layoutShift(page)).toBeLessThan(0.02);
    expect(await accessibilityFaults(page)).toEqual([]);
    expect(await sidewaysScroll(page)).toBeLessThanOrEqual(0);
    if (stranger) expect(stranger.faults).toEqual([]);
    await stranger?.context.close();
  });

  it.each(["runs", "new run", "account", ...STATIONS])("%s: no failed request, no violation, no layout shift, no sideways scroll", async (name) => {
    const { page, faults } = watched;
    const path = { runs: "/runs", "new run": "/runs/new", account: "/account" }[name] ?? `${run}/${name}`;
    faults.length = 0;
    await page.goto(path, { waitUntil: "networkidle" });
    expect(await layoutShift(page)).toBeLessThan(0.02);
    expect(await accessibilityFaults(page)).toEqual([]);
    expect(await sidewaysScroll(page)).toBeLessThanOrEqual(0);
    expect(faults).toEqual([]);
  });
});
