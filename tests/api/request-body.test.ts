import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { closeDatabase } from "@/db/connection";
import { call, problemIn, type Call, type Credentials } from "./client";
import { makeGroup, makeSignedIn } from "./factories";

let as: Credentials;

beforeAll(async () => {
  as = (await makeSignedIn(await makeGroup(), "owner")).credentials;
});
afterAll(closeDatabase);

const JSON_TYPE = { "content-type": "application/json" };
const sent = async (options: Call) => problemIn(await call("POST", "/api/v1/tokens", { as, ...options }));

describe("a JSON body", () => {
  it("with a syntax error is answered 400", async () => {
    expect(await sent({ body: '{"name": ', headers: JSON_TYPE })).toMatchObject({ status: 400, type: "urn:strandline:problem:malformed-request" });
    expect((await sent({ body: "", headers: JSON_TYPE })).status).toBe(400);
  });

  it("that is not UTF-8 is answered 400", async () => {
    expect((await sent({ body: new Uint8Array([0x22, 0xe9, 0x22]), headers: JSON_TYPE })).status).toBe(400);
  });

  it("under another content type is answered 415", async () => {
    for (const type of ["text/plain", "application/x-www-form-urlencoded", "application/jsonx"]) {
      expect((await sent({ body: "{}", headers: { "content-type": type } })).status).toBe(415);
    }
    expect((await sent({})).status).toBe(415);
  });

  it("may say its character set", async () => {
    expect((await sent({ body: "{}", headers: { "content-type": "Application/JSON; charset=utf-8" } })).status).toBe(422);
  });

  it("larger than 1 MiB is answered 413", async () => {
    const name = "x".repeat(1024 * 1024);
    expect((await sent({ json: { name, scopes: ["read"], expiresInDays: 1 } })).status).toBe(413);
  });

  it("is not looked at before the caller is known", async () => {
    expect((await problemIn(await call("POST", "/api/v1/tokens", { body: "{", headers: JSON_TYPE }))).status).toBe(401);
  });

  it("cannot reach an object's prototype", async () => {
    const problem = await sent({ body: '{"name":"t","scopes":["read"],"expiresInDays":1,"__proto__":{"role":"owner"}}', headers: JSON_TYPE });
    expect(problem).toMatchObject({ status: 422, errors: [{ where: "__proto__" }] });
  });
});

describe("a path that is none of the API's", () => {
  it("is answered with a problem, whoever asks and however", async () => {
    for (const method of ["GET", "POST", "PUT", "PATCH", "DELETE"]) {
      expect((await problemIn(await call(method, "/api/v1/nothing/here"))).status).toBe(404);
    }
  });
});
