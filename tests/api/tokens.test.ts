import { eq } from "drizzle-orm";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { closeDatabase, database } from "@/db/connection";
import { memberships } from "@/db/schema/memberships";
import { tokens } from "@/db/schema/tokens";
import { call, callJson, problemIn, tokenOf } from "./client";
import { makeGroup, makeSignedIn, type SignedInMember } from "./factories";

interface Made {
  id: string;
  token: string;
  hint: string;
  expiresAt: string;
}
interface Listed {
  items: { id: string; name: string }[];
  nextCursor: string | null;
}

let groupId: string;
let member: SignedInMember;

beforeAll(async () => {
  groupId = await makeGroup();
  member = await makeSignedIn(groupId, "contributor");
});
afterAll(closeDatabase);

const make = (fields: object) =>
  callJson<Made>("POST", "/api/v1/tokens", { as: member.credentials, json: { name: "t", scopes: ["read"], expiresInDays: 30, ...fields } });
const me = (token: string) => call("GET", "/api/v1/me", { as: { token } });

describe("a token", () => {
  it("is shown once and kept as a hash", async () => {
    const { id, token, hint } = await make({ name: "apparatus" });
    expect(token).toMatch(/^sl_[A-Za-z0-9_-]{32}$/);
    expect(token.startsWith(hint)).toBe(true);
    const [row] = await database().select().from(tokens).where(eq(tokens.id, id));
    expect(JSON.stringify(row)).not.toContain(token);
    const list = await call("GET", "/api/v1/tokens", { as: member.credentials });
    expect(await list.text()).not.toContain(token);
  });

  it("acts as its member with its scopes, and only with those", async () => {
    const { token } = await make({ scopes: ["upload", "read"] });
    expect(await (await me(token)).json()).toMatchObject({ user: { id: member.userId }, role: "contributor", scopes: ["upload", "read"] });
    const uploadOnly = await make({ scopes: ["upload"] });
    const refused = await problemIn(await me(uploadOnly.token));
    expect(refused).toMatchObject({ status: 403, detail: 'This needs a token with the scope "read".' });
  });

  it("follows its member's role, and dies with the membership", async () => {
    const other = await makeSignedIn(groupId, "analyst");
    const as = await tokenOf(other.credentials, ["read"]);
    await database().update(memberships).set({ role: "reader" }).where(eq(memberships.userId, other.userId));
    expect(await callJson("GET", "/api/v1/me", { as })).toMatchObject({ role: "reader" });
    await database().delete(memberships).where(eq(memberships.userId, other.userId));
    expect((await call("GET", "/api/v1/me", { as })).status).toBe(401);
  });

  it("cannot make, list or revoke tokens, nor end a session", async () => {
    const { id, token } = await make({ scopes: ["read", "upload", "analyse"] });
    for (const [method, path] of [["POST", "/tokens"], ["GET", "/tokens"], ["DELETE", `/tokens/${id}`], ["DELETE", "/session"]]) {
      expect((await call(method, `/api/v1${path}`, { as: { token } })).status).toBe(403);
    }
  });

  it("stops with its expiry and with its revocation", async () => {
    const expired = await make({ expiresInDays: 366 });
    expect(Date.parse(expired.expiresAt) - Date.now()).toBeGreaterThan(365 * 24 * 3600_000);
    expect((await me(expired.token)).status).toBe(200);
    await database().update(tokens).set({ expiresAt: new Date(Date.now() - 1) }).where(eq(tokens.id, expired.id));
    expect((await me(expired.token)).status).toBe(401);

    const revoked = await make({});
    expect((await call("DELETE", `/api/v1/tokens/${revoked.id}`, { as: member.credentials })).status).toBe(204);
    expect((await me(revoked.token)).status).toBe(401);
    expect((await call("DELETE", `/api/v1/tokens/${revoked.id}`, { as: member.credentials })).status).toBe(404);
  });

  it("is noted as used, at most once a minute", async () => {
    const { id, token } = await make({});
    const lastUse = async () => (await database().select({ at: tokens.lastUsedAt }).from(tokens).where(eq(tokens.id, id)))[0].at;
    expect(await lastUse()).toBeNull();
    await me(token);
    const first = await lastUse();
    expect(Math.abs(Date.now() - (first?.getTime() ?? 0))).toBeLessThan(10_000);
    await me(token);
    expect(await lastUse()).toEqual(first);
    await database().update(tokens).set({ lastUsedAt: new Date(Date.now() - 61_000) }).where(eq(tokens.id, id));
    await me(token);
    expect((await lastUse())?.getTime()).toBeGreaterThanOrEqual(first?.getTime() ?? Infinity);
  });

  it("in a header is not replaced by a good cookie when it is bad", async () => {
    for (const authorization of ["Bearer sl_unknown", "Bearer", "Basic b3duZXI6cGFzc3dvcmQ=", `Bearer sl_${"x".repeat(32)}`]) {
      const response = await call("GET", "/api/v1/me", { as: member.credentials, headers: { authorization } });
      expect(response.status).toBe(401);
      expect(response.headers.get("www-authenticate")).toMatch(/^Bearer/);
    }
  });

  it("needs no page of ours: another origin does not matter to it", async () => {
    const { token } = await make({});
    const response = await call("GET", "/api/v1/me", { as: { token }, headers: { origin: "https://elsewhere.example" } });
    expect(response.status).toBe(200);
  });
});

describe("making a token", () => {
  const refused = async (json: unknown) => problemIn(await call("POST", "/api/v1/tokens", { as: member.credentials, json }));
  const good = { name: "t", scopes: ["read"], expiresInDays: 30 };

  it.each([
    ["a blank name", { ...good, name: "  " }, "name"],
    ["no scope", { ...good, scopes: [] }, "scopes"],
    ["an unknown scope", { ...good, scopes: ["read", "everything"] }, "scopes[1]"],
    ["a scope twice", { ...good, scopes: ["read", "read"] }, "scopes"],
    ["more than 366 days", { ...good, expiresInDays: 367 }, "expiresInDays"],
    ["half a day", { ...good, expiresInDays: 0.5 }, "expiresInDays"],
    ["a field there is not", { ...good, role: "owner" }, "role"],
    ["a list", [good], "body"],
  ])("refuses %s and names the field", async (_what, json, where) => {
    const problem = await refused(json);
    expect(problem.status).toBe(422);
    expect(problem.errors?.[0].where).toBe(where);
  });

  it("names every field that is wrong", async () => {
    const { errors } = await refused({ scopes: 3, extra: 1 });
    expect(errors?.map(({ where }) => where).sort()).toEqual(["expiresInDays", "extra", "name", "scopes"]);
  });
});

describe("the list of tokens", () => {
  it("comes in pages, newest first, each token once", async () => {
    const { credentials: as } = await makeSignedIn(groupId, "reader");
    for (let n = 0; n < 5; n++) await callJson("POST", "/api/v1/tokens", { as, json: { name: `n${n}`, scopes: ["read"], expiresInDays: 1 } });
    const names: string[] = [];
    let cursor: string | null = "";
    for (let page = 0; cursor !== null && page < 10; page++) {
      const { items, nextCursor }: Listed = await callJson<Listed>("GET", `/api/v1/tokens?limit=2${cursor && `&cursor=${cursor}`}`, { as });
      expect(items.length).toBeLessThanOrEqual(2);
      names.push(...items.map(({ name }) => name));
      cursor = nextCursor;
    }
    expect(names).toEqual(["n4", "n3", "n2", "n1", "n0"]);
  });

  it("refuses a cursor and a limit it did not give", async () => {
    for (const [query, where] of [["cursor=zzz", "cursor"], ["limit=0", "limit"], ["limit=many", "limit"], ["limit=1&limit=2", "limit"]]) {
      const problem = await problemIn(await call("GET", `/api/v1/tokens?${query}`, { as: member.credentials }));
      expect(problem).toMatchObject({ status: 422, errors: [{ where }] });
    }
  });

  it("holds nobody else's, and nobody else can revoke them, not even the group's owner", async () => {
    const { id } = await make({});
    const owner = await makeSignedIn(groupId, "owner");
    const list = await callJson<Listed>("GET", "/api/v1/tokens", { as: owner.credentials });
    expect(list).toEqual({ items: [], nextCursor: null });
    expect((await call("DELETE", `/api/v1/tokens/${id}`, { as: owner.credentials })).status).toBe(404);
  });
});
