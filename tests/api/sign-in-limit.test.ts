import { randomInt } from "node:crypto";
import { eq } from "drizzle-orm";
import { afterAll, describe, expect, it } from "vitest";
import { closeDatabase, database } from "@/db/connection";
import { newId } from "@/db/new-id";
import { rateLimits } from "@/db/schema/rate-limits";
import { countAttempt, forgetAttempts, uncountAttempt, type AttemptLimit } from "@/lib/accounts/attempt-limit";
import { call, problemIn } from "./client";
import { makeGroup, makeMember, PASSWORD } from "./factories";

afterAll(closeDatabase);

/** An address of its own, so that no other test's sign-ins are limited. */
const fromOwnAddress = () => ({ "x-forwarded-for": `198.51.100.${randomInt(1, 255)}, 203.0.113.${randomInt(1, 255)}` });

describe("sign-in attempts", () => {
  it("are refused after ten failures for one address, even with the right password, and say when to try again", async () => {
    const { email } = await makeMember(await makeGroup(), "reader");
    const headers = fromOwnAddress();
    const attempt = (password: string) => call("POST", "/api/v1/session", { json: { email, password }, headers });
    for (let failure = 0; failure < 10; failure++) expect((await attempt("wrong-password")).status).toBe(401);

    const refused = await attempt(PASSWORD);
    expect(refused.status).toBe(429);
    expect(Number(refused.headers.get("retry-after"))).toBeGreaterThan(800);
    expect(Number(refused.headers.get("retry-after"))).toBeLessThanOrEqual(900);
    expect((await problemIn(refused)).type).toBe("urn:strandline:problem:too-many-requests");
  });

  it("are limited for addresses without an account too, so that the limit tells nothing", async () => {
    const email = `nobody-${newId()}@test.example`;
    const headers = fromOwnAddress();
    const statuses: number[] = [];
    for (let attempt = 0; attempt < 11; attempt++) {
      statuses.push((await call("POST", "/api/v1/session", { json: { email, password: "wrong-password" }, headers })).status);
    }
    expect(statuses).toEqual([...Array<number>(10).fill(401), 429]);
  });

  it("start from nothing after a success", async () => {
    const { email } = await makeMember(await makeGroup(), "reader");
    const headers = fromOwnAddress();
    for (const password of [...Array<string>(9).fill("wrong-password"), PASSWORD, "wrong-password", PASSWORD]) {
      const { status } = await call("POST", "/api/v1/session", { json: { email, password }, headers });
      expect(status).toBe(password === PASSWORD ? 200 : 401);
    }
  });
});

describe("an attempt limit", () => {
  const limit: AttemptLimit = { purpose: `test:${newId()}`, attempts: 5, window_ms: 60_000 };

  it("lets exactly so many through when they come at once", async () => {
    const outcomes = await Promise.all(Array.from({ length: 20 }, () => countAttempt(limit, "at once")));
    expect(outcomes.filter((outcome) => outcome === null)).toHaveLength(5);
  });

  it("counts each one by itself, and gives back what was no failure", async () => {
    for (let attempt = 0; attempt < 5; attempt++) expect(await countAttempt(limit, "a")).toBeNull();
    expect(await countAttempt(limit, "a")).toMatchObject({ code: "too-many-requests" });
    expect(await countAttempt(limit, "b")).toBeNull();
    await uncountAttempt(limit, "a");
    await uncountAttempt(limit, "a");
    expect(await countAttempt(limit, "a")).toBeNull();
    await forgetAttempts(limit, "a");
    for (let attempt = 0; attempt < 5; attempt++) expect(await countAttempt(limit, "a")).toBeNull();
  });

  it("opens again when its window is over", async () => {
    const brief: AttemptLimit = { purpose: `test:${newId()}`, attempts: 1, window_ms: 300 };
    expect(await countAttempt(brief, "a")).toBeNull();
    expect(await countAttempt(brief, "a")).not.toBeNull();
    await new Promise((resolve) => setTimeout(resolve, 350));
    expect(await countAttempt(brief, "a")).toBeNull();
  });

  it("keeps no address in the table", async () => {
    await countAttempt(limit, "someone@test.example");
    const rows = await database().select().from(rateLimits);
    expect(JSON.stringify(rows)).not.toContain("someone");
    for (const { bucket } of rows.filter((row) => row.bucket.startsWith("test:"))) {
      await database().delete(rateLimits).where(eq(rateLimits.bucket, bucket));
    }
  });
});
