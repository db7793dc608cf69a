import { afterEach, describe, expect, it, vi } from "vitest";
import { z } from "zod";
import { noContent } from "@/lib/http/answers";
import { endpoint } from "@/lib/http/endpoint";
import { serve } from "@/lib/http/serve";
import { invalidAt, problem } from "@/lib/problem";

const spec = endpoint({
  method: "POST",
  path: "/api/v1/things/{thingId}",
  action: "public",
  summary: "A thing",
  params: z.object({ thingId: z.string().regex(/^\d+$/) }),
  query: z.object({ page: z.coerce.number().int().default(1) }),
  body: z.object({ bootstrap: z.strictObject({ replicates: z.number() }), thresholds: z.array(z.number()).optional() }),
  answers: { 204: { description: "Done" } },
});

function send(handler: Parameters<typeof serve<typeof spec.params, typeof spec.query, typeof spec.body, "public">>[1], json: unknown, { thingId = "7", query = "" } = {}) {
  const request = new Request(`http://127.0.0.1/api/v1/things/${thingId}${query}`, {
    method: "POST",
    headers: { "content-type": "application/json" },
    body: JSON.stringify(json),
  });
  return serve(spec, handler)(request, { params: Promise.resolve({ thingId }) });
}

const GOOD = { bootstrap: { replicates: 10 } };

afterEach(() => vi.restoreAllMocks());

describe("serving a call", () => {
  it("hands the handler what the schemas made of path, query and body", async () => {
    const handler = vi.fn(async () => noContent());
    expect((await send(handler, GOOD, { query: "?page=3&unknown=1" })).status).toBe(204);
    expect(handler).toHaveBeenCalledWith(expect.objectContaining({ actor: null, params: { thingId: "7" }, query: { page: 3 }, body: GOOD }));
  });

  it("answers a path no id can have as not found, before it looks at the rest", async () => {
    expect((await send(async () => noContent(), {}, { thingId: "x" })).status).toBe(404);
  });

  it("names the wrong fields by their path", async () => {
    const response = await send(async () => noContent(), { bootstrap: { replicates: "many", seeds: 1 }, thresholds: [1, null], extra: 0 });
    expect(response.status).toBe(422);
    expect(response.headers.get("content-type")).toBe("application/problem+json");
    const { errors } = (await response.json()) as { errors: { where: string }[] };
    expect(errors.map(({ where }) => where).sort()).toEqual(["bootstrap.replicates", "bootstrap.seeds", "extra", "thresholds[1]"]);
  });

  it("turns a handler's problem into its answer", async () => {
    const response = await send(async () => invalidAt("shots.csv line 12", "a count is missing"), GOOD);
    expect(await response.json()).toEqual({
      type: "urn:strandline:problem:invalid-input",
      title: "The input is not valid",
      status: 422,
      detail: "shots.csv line 12: a count is missing",
      errors: [{ where: "shots.csv line 12", message: "a count is missing" }],
    });
    const limited = await send(async () => ({ ...problem("too-many-requests", "later"), retryAfter_s: 0.2 }), GOOD);
    expect(limited.headers.get("retry-after")).toBe("1");
  });

  it("answers a bug with a fixed text and logs it in one line", async () => {
    const log = vi.spyOn(console, "error").mockImplementation(() => {});
    const response = await send(async () => {
      throw new Error("a bug\nwith a second line");
    }, GOOD);
    expect(response.status).toBe(500);
    expect(await response.text()).not.toContain("bug");
    expect(log).toHaveBeenCalledOnce();
    expect(String(log.mock.calls[0][0])).toMatch(/^POST \/api\/v1\/things\/\{thingId\} failed: Error: a bug at .*$/);
  });

  it("never logs what a database error was about", async () => {
    const log = vi.spyOn(console, "error").mockImplementation(() => {});
    const { DrizzleQueryError } = await import("drizzle-orm");
    const errors = [
      new DrizzleQueryError("insert into tokens values (?)", ["a secret"], Object.assign(new Error("Duplicate entry 'a secret'"), { code: "ER_DUP_ENTRY" })),
      new DrizzleQueryError("insert into tokens values (?)", ["a secret"], new Error("a secret")),
    ];
    for (const error of errors) {
      await send(async () => {
        throw error;
      }, GOOD);
    }
    expect(log.mock.calls[0][0]).toBe("POST /api/v1/things/{thingId} failed: ER_DUP_ENTRY");
    expect(JSON.stringify(log.mock.calls)).not.toContain("secret");
  });
});
