import { eq } from "drizzle-orm";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { ENDPOINTS } from "@/app/api/v1/endpoints";
import { closeDatabase, database } from "@/db/connection";
import { newId } from "@/db/new-id";
import { runs } from "@/db/schema/runs";
import type { TokenScope } from "@/db/schema/tokens";
import { POLICY, ROLES, type Role } from "@/lib/accounts/policy";
import type { Endpoint } from "@/lib/http/endpoint";
import { problemIn, signedIn, tokenOf, type Credentials } from "./client";
import { callEndpoint, callWithBrokenBody, namesAThing, refersToAThing } from "./endpoint-call";
import { makeGroup, makeSignedIn, PASSWORD, type SignedInMember } from "./factories";
import { prepareRows, type PreparedIds } from "./prepared-rows";

const SCOPES: TokenScope[] = ["read", "upload", "analyse"];
const ADMITTED = "admitted";

let ours: Record<Role, SignedInMember>;
let foreign: Record<"owner" | "reader", SignedInMember>;
let ownerTokens: Record<TokenScope, Credentials>;
let readerToken: Credentials;
let foreignToken: Credentials;
/** Things of the owner's, which no admitted call has changed. */
let untouched: PreparedIds;

beforeAll(async () => {
  const [groupId, foreignGroupId] = [await makeGroup(), await makeGroup()];
  ours = {
    reader: await makeSignedIn(groupId, "reader"),
    contributor: await makeSignedIn(groupId, "contributor"),
    analyst: await makeSignedIn(groupId, "analyst"),
    owner: await makeSignedIn(groupId, "owner"),
  };
  foreign = { owner: await makeSignedIn(foreignGroupId, "owner"), reader: await makeSignedIn(foreignGroupId, "reader") };
  const token = (scopes: TokenScope[]) => tokenOf(ours.owner.credentials, scopes);
  ownerTokens = { read: await token(["read"]), upload: await token(["upload"]), analyse: await token(["analyse"]) };
  readerToken = await tokenOf(ours.reader.credentials, SCOPES);
  foreignToken = await tokenOf(foreign.owner.credentials, SCOPES);
  untouched = await prepareRows(ours.owner);
});
afterAll(closeDatabase);

const ruleOf = (endpoint: Endpoint): { from: Role; scope: TokenScope; sessionOnly?: true } | null =>
  endpoint.action === "public" ? null : POLICY[endpoint.action];

function expectedOfRole(endpoint: Endpoint, role: Role): number | typeof ADMITTED {
  const rule = ruleOf(endpoint);
  return rule === null || ROLES.indexOf(role) >= ROLES.indexOf(rule.from) ? ADMITTED : 403;
}

function expectedOfToken(endpoint: Endpoint, role: Role, scopes: TokenScope[]): number | typeof ADMITTED {
  const rule = ruleOf(endpoint);
  if (rule !== null && (rule.sessionOnly || !scopes.includes(rule.scope))) return 403;
  return expectedOfRole(endpoint, role);
}

/** Things of another group are not found, whoever may work on one's own. */
function expectedAbroad(endpoint: Endpoint, athome: number | typeof ADMITTED): number | typeof ADMITTED {
  return athome === ADMITTED && namesAThing(endpoint) ? 404 : athome;
}

/** A wrong password is a legitimate answer of a public call, and a refused state of a member's. */
async function expectAnswer(endpoint: Endpoint, response: Response, expected: number | typeof ADMITTED): Promise<void> {
  await response.body?.cancel();
  if (expected !== ADMITTED) return expect(response.status).toBe(expected);
  expect(endpoint.action === "public" ? [403, 404, 500] : [401, 403, 404, 500]).not.toContain(response.status);
}

/** Signing out takes a session of its own along. */
function credentialsFor(endpoint: Endpoint, member: SignedInMember): Promise<Credentials> | Credentials {
  return endpoint.action === "session.end" ? signedIn(member.email, PASSWORD) : member.credentials;
}

const named = (endpoints: Endpoint[]) => endpoints.map((endpoint) => ({ name: `${endpoint.method} ${endpoint.path}`, endpoint }));

const sameIdFor = (id: string): PreparedIds => ({ runs: id, archives: id, jobs: id, detections: id, analyses: id, studies: id, tokens: id });

describe.each(named(ENDPOINTS))("$name", ({ endpoint }) => {
  it("asks who it is", async () => {
    const response = await callEndpoint(endpoint, untouched, {});
    await expectAnswer(endpoint, response, endpoint.action === "public" ? ADMITTED : 401);
  });

  it.each(ROLES)("answers a session of the role %s by the policy", async (role) => {
    const things = await prepareRows(ours[role]);
    const response = await callEndpoint(endpoint, things, await credentialsFor(endpoint, ours[role]));
    await expectAnswer(endpoint, response, expectedOfRole(endpoint, role));
  });

  it.each(SCOPES)("answers an owner's token with the scope %s alone by the policy", async (scope) => {
    const things = await prepareRows(ours.owner);
    await expectAnswer(endpoint, await callEndpoint(endpoint, things, ownerTokens[scope]), expectedOfToken(endpoint, "owner", [scope]));
  });

  it("gives a reader's token no more than the reader", async () => {
    const things = await prepareRows(ours.reader);
    await expectAnswer(endpoint, await callEndpoint(endpoint, things, readerToken), expectedOfToken(endpoint, "reader", SCOPES));
  });

  it("keeps our things from another group's owner, reader and token", async () => {
    for (const role of ["owner", "reader"] as const) {
      const response = await callEndpoint(endpoint, untouched, await credentialsFor(endpoint, foreign[role]));
      await expectAnswer(endpoint, response, expectedAbroad(endpoint, expectedOfRole(endpoint, role)));
    }
    const response = await callEndpoint(endpoint, untouched, foreignToken);
    await expectAnswer(endpoint, response, expectedAbroad(endpoint, expectedOfToken(endpoint, "owner", SCOPES)));
    expect(await database().select().from(runs).where(eq(runs.id, untouched.runs))).toHaveLength(1);
  });
});

describe.each(named(ENDPOINTS.filter(namesAThing)))("$name", ({ endpoint }) => {
  it("answers for a thing of another group exactly as for one that is not there", async () => {
    const as = foreign.owner.credentials;
    const theirs = await problemIn(await callEndpoint(endpoint, untouched, as));
    expect(await problemIn(await callEndpoint(endpoint, sameIdFor(newId()), as))).toEqual(theirs);
    expect((await problemIn(await callEndpoint(endpoint, sameIdFor("%27"), as))).status).toBe(404);
  });
});

describe.each(named(ENDPOINTS.filter((endpoint) => endpoint.body !== null && endpoint.action !== "public")))("$name", ({ endpoint }) => {
  it("looks at what was sent last: after who asks, whether they may, and whether the thing is theirs", async () => {
    const status = async (as: Credentials) => (await problemIn(await callWithBrokenBody(endpoint, untouched, as))).status;
    expect(await status({})).toBe(401);
    if (expectedOfRole(endpoint, "reader") === 403) expect(await status(ours.reader.credentials)).toBe(403);
    expect(await status(foreign.owner.credentials)).toBe(namesAThing(endpoint) ? 404 : 400);
    expect(await status(ours.owner.credentials)).toBe(400);
  });
});

describe.each(named(ENDPOINTS.filter(refersToAThing)))("$name", ({ endpoint }) => {
  it("does not reach another group's thing by a reference in the body", async () => {
    const theirs = await prepareRows(foreign.owner);
    const as = foreign.owner.credentials;
    const absent = await problemIn(await callEndpoint(endpoint, theirs, as, sameIdFor(newId())));
    expect([404, 422]).toContain(absent.status);
    expect(await problemIn(await callEndpoint(endpoint, theirs, as, untouched))).toEqual(absent);
    expect((await callEndpoint(endpoint, theirs, as)).ok).toBe(true);
  });
});

describe.each(named(ENDPOINTS.filter((endpoint) => endpoint.method === "GET" && !namesAThing(endpoint))))("$name", ({ endpoint }) => {
  it("shows another group nothing of ours", async () => {
    const text = await (await callEndpoint(endpoint, untouched, foreign.owner.credentials)).text();
    for (const id of Object.values(untouched)) expect(text).not.toContain(id);
  });
});
