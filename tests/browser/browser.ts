import { AxeBuilder } from "@axe-core/playwright";
import { chromium, type Browser, type BrowserContext, type Page } from "playwright-core";
import { testUrl } from "../api/client";

export const DEMO_PASSWORD = process.env.STRANDLINE_DEMO_PASSWORD ?? "low-tide-demo";

/** Starts Debian's Chromium without a window. */
export function launchBrowser(): Promise<Browser> {
  return chromium.launch({ executablePath: "/usr/bin/chromium" });
}

/** A page that remembers what went wrong on it: failed requests, error answers, console errors. */
export interface WatchedPage {
  page: Page;
  context: BrowserContext;
  faults: string[];
}

interface View {
  width: number;
  height: number;
  theme: "paper" | "night";
}

export const DESK: View = { width: 1440, height: 900, theme: "paper" };
export const PHONE: View = { width: 390, height: 844, theme: "paper" };

/** Opens a page of the given size and theme whose faults are kept. */
export async function openPage(browser: Browser, view: View = DESK, { touch = false } = {}): Promise<WatchedPage> {
  const context = await browser.newContext({
    viewport: { width: view.width, height: view.height },
    colorScheme: view.theme === "night" ? "dark" : "light",
    hasTouch: touch,
    baseURL: testUrl(),
  });
  const page = await context.newPage();
  const faults: string[] = [];
  page.on("console", (message) => message.type() === "error" && faults.push(`console: ${message.text()}`));
  page.on("pageerror", (error) => faults.push(`page error: ${error.message}`));
  page.on("response", (response) => response.status() >= 400 && faults.push(`${response.status()} ${response.url()}`));
  page.on("requestfailed", (request) => {
    // A prefetch that a navigation overtakes is no fault.
    if (request.failure()?.errorText !== "net::ERR_ABORTED") faults.push(`failed: ${request.url()}`);
  });
  return { page, context, faults };
}

/** Signs a demo member in through the page. */
export async function signInAs(page: Page, role: string): Promise<void> {
  await page.goto("/sign-in");
  await page.getByLabel("Mail address").fill(`${role}@demo.example`);
  await page.getByLabel("Password").fill(DEMO_PASSWORD);
  await page.getByRole("button", { name: "Sign in" }).click();
  await page.waitForURL("**/runs");
}

/** Returns what an accessibility check finds on the page, one line a violation. */
export async function accessibilityFaults(page: Page): Promise<string[]> {
  const { violations } = await new AxeBuilder({ page }).analyze();
  return violations.map((violation) => `${violation.id}: ${violation.help} (${violation.nodes.map((node) => node.target.join(" ")).slice(0, 3).join("; ")})`);
}

/** Returns the page's cumulative layout shift so far. */
export function layoutShift(page: Page): Promise<number> {
  return page.evaluate(
    () =>
      new Promise<number>((resolve) => {
        let sum = 0;
        new PerformanceObserver((list) => {
          for (const entry of list.getEntries()) {
            const shift = entry as PerformanceEntry & { value: number; hadRecentInput: boolean };
            if (!shift.hadRecentInput) sum += shift.value;
          }
        }).observe({ type: "layout-shift", buffered: true });
        setTimeout(() => resolve(sum), 400);
      }),
  );
}
