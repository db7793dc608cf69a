import { eq } from "drizzle-orm";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { closeDatabase, database } from "@/db/connection";
import { memberships } from "@/db/schema/memberships";
import { sessions } from "@/db/schema/sessions";
import { call, callJson, problemIn, signedIn } from "./client";
import { makeGroup, makeMember, makeSignedIn, PASSWORD, type Member } from "./factories";

let groupId: string;
let member: Member;

beforeAll(async () => {
  groupId = await makeGroup();
  member = await makeMember(groupId, "analyst");
});
afterAll(closeDatabase);

const signIn = (email: string, password: string) => call("POST", "/api/v1/session", { json: { email, password } });

describe("signing in", () => {
  it("answers who signed in, in which group and role, with a cookie scripts on the page cannot read", async () => {
    const response = await signIn(member.email, PASSWORD);
    expect(response.status).toBe(200);
    expect(await response.json()).toMatchObject({
      user: { id: member.userId, name: "Test analyst", email: member.email },
      group: { id: groupId },
      role: "analyst",
    });
    const cookie = response.headers.getSetCookie().join();
    expect(cookie).toMatch(/^strandline_session=\S+; Path=\/; Max-Age=2592000; HttpOnly; SameSite=Lax$/);
    expect(cookie).not.toContain(member.userId);
  });

  it("takes the address in any case and with blanks around it", async () => {
    expect((await signIn(` ${member.email.toUpperCase()} `, PASSWORD)).status).toBe(200);
  });

  it("answers a wrong password and an unknown address alike", async () => {
    const wrong = await problemIn(await signIn(member.email, "not the password"));
    const unknown = await problemIn(await signIn("nobody-at-all@test.example", "not the password"));
    expect(wrong.status).toBe(401);
    expect(unknown).toEqual(wrong);
  });

  it("refuses a person who is in no group any more", async () => {
    const leaver = await makeMember(groupId, "reader");
    await database().delete(memberships).where(eq(memberships.userId, leaver.userId));
    expect((await signIn(leaver.email, PASSWORD)).status).toBe(401);
  });
});

describe("a session", () => {
  it("tells who acts and that it may use every scope", async () => {
    const as = await signedIn(member.email, PASSWORD);
    expect(await callJson("GET", "/api/v1/me", { as })).toMatchObject({
      user: { email: member.email },
      role: "analyst",
      scopes: ["read", "upload", "analyse"],
    });
  });

  it("ends with sign-out, in every copy of the cookie", async () => {
    const as = await signedIn(member.email, PASSWORD);
    const out = await call("DELETE", "/api/v1/session", { as });
    expect(out.status).toBe(204);
    expect(out.headers.getSetCookie().join()).toMatch(/^strandline_session=; .*Max-Age=0/);
    expect((await call("GET", "/api/v1/me", { as })).status).toBe(401);
  });

  it("has the role of today, not that of the sign-in", async () => {
    const { userId, credentials } = await makeSignedIn(groupId, "reader");
    await database().update(memberships).set({ role: "owner" }).where(eq(memberships.userId, userId));
    expect(await callJson("GET", "/api/v1/me", { as: credentials })).toMatchObject({ role: "owner" });
    await database().delete(memberships).where(eq(memberships.userId, userId));
    expect((await call("GET", "/api/v1/me", { as: credentials })).status).toBe(401);
  });

  it("ends on its day", async () => {
    const { userId, credentials } = await makeSignedIn(groupId, "reader");
    await database().update(sessions).set({ expiresAt: new Date(Date.now() - 1) }).where(eq(sessions.userId, userId));
    expect((await call("GET", "/api/v1/me", { as: credentials })).status).toBe(401);
  });

  it("does not open with a cookie that was tampered with", async () => {
    const { cookie = "" } = await signedIn(member.email, PASSWORD);
    const tampered = cookie.slice(0, -6) + (cookie.endsWith("aaaaaa") ? "bbbbbb" : "aaaaaa");
    for (const bad of [tampered, "strandline_session=", "strandline_session=x", "strandline_session=%00"]) {
      expect((await problemIn(await call("GET", "/api/v1/me", { as: { cookie: bad } }))).status).toBe(401);
    }
  });
});

describe("changes made with a cookie", () => {
  const token = { name: "from a page", scopes: ["read"], expiresInDays: 1 };
  const from = async (headers: Record<string, string>) => {
    const as = await signedIn(member.email, PASSWORD);
    return (await call("POST", "/api/v1/tokens", { as, json: token, headers })).status;
  };

  it("are refused when they come from another site's page", async () => {
    expect(await from({ origin: "https://elsewhere.example" })).toBe(403);
    expect(await from({ origin: "null" })).toBe(403);
    expect(await from({ "sec-fetch-site": "cross-site" })).toBe(403);
    expect(await from({ "sec-fetch-site": "same-site" })).toBe(403);
  });

  it("are taken from our own pages and from programs", async () => {
    const own = new URL(process.env.STRANDLINE_TEST_URL ?? "").origin;
    expect(await from({ origin: own, "sec-fetch-site": "same-origin" })).toBe(201);
    expect(await from({})).toBe(201);
  });

  it("include signing in itself", async () => {
    const response = await call("POST", "/api/v1/session", {
      json: { email: member.email, password: PASSWORD },
      headers: { origin: "https://elsewhere.example" },
    });
    expect(response.status).toBe(403);
    expect(response.headers.getSetCookie()).toEqual([]);
  });
});
