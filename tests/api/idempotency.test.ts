import { and, eq } from "drizzle-orm";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { closeDatabase, database } from "@/db/connection";
import { newId } from "@/db/new-id";
import { idempotencyKeys } from "@/db/schema/idempotency-keys";
import type { Actor } from "@/lib/accounts/policy";
import { accepted, created, json } from "@/lib/http/answers";
import { onceByKey } from "@/lib/http/idempotency";
import { isProblem, problem, type Problem } from "@/lib/problem";

const request = { method: "POST", target: "/api/v1/runs", bodyText: '{"title":"a"}' };
let actor: Actor;
let runs: number;

beforeAll(() => {
  actor = {
    userId: newId(),
    userName: "Test",
    email: "test@test.example",
    groupId: newId(),
    groupName: "Test",
    role: "owner",
    scopes: ["read", "upload", "analyse"],
    via: "session",
    credentialId: newId(),
  };
  runs = 0;
});
afterAll(closeDatabase);

const work = async () => created({ id: ++runs });
const shown = async (outcome: Response | Problem) =>
  isProblem(outcome) ? { code: outcome.code } : { status: outcome.status, body: (await outcome.json()) as unknown };

describe("an Idempotency-Key", () => {
  it("has the work done once and answers alike", async () => {
    const key = newId();
    const first = await shown(await onceByKey(actor, key, request, work));
    const second = await shown(await onceByKey(actor, key, request, work));
    expect(first).toEqual({ status: 201, body: { id: 1 } });
    expect(second).toEqual(first);
    expect(runs).toBe(1);
  });

  it("with another body, query, path or method is a conflict", async () => {
    const key = newId();
    await onceByKey(actor, key, request, work);
    for (const other of [{ bodyText: "{}" }, { target: "/api/v1/runs?x=1" }, { method: "PATCH" }]) {
      expect(await shown(await onceByKey(actor, key, { ...request, ...other }, work))).toEqual({ code: "conflict" });
    }
  });

  it("lets one of many calls at once do the work", async () => {
    const key = newId();
    let done = 0;
    const slow = async () => {
      await new Promise((resolve) => setTimeout(resolve, 200));
      return accepted({ id: ++done });
    };
    const outcomes = await Promise.all(Array.from({ length: 8 }, () => onceByKey(actor, key, request, slow)));
    expect(done).toBe(1);
    const waiting = outcomes.filter(isProblem);
    expect(waiting).toHaveLength(7);
    for (const outcome of waiting) expect(outcome).toMatchObject({ code: "conflict", retryAfter_s: 2 });
  });

  it("is free again after a refusal, a failure and a crash", async () => {
    const key = newId();
    const outcomes: (() => Promise<Response | Problem>)[] = [
      async () => problem("conflict", "not now"),
      async () => json({}, 503),
      async () => {
        throw new Error("a bug");
      },
    ];
    for (const outcome of outcomes) await onceByKey(actor, key, request, outcome).catch(() => null);
    expect(await shown(await onceByKey(actor, key, request, async () => created({ id: "at last" })))).toEqual({
      status: 201,
      body: { id: "at last" },
    });
  });

  it("belongs to its member: another's same key is another key", async () => {
    const key = newId();
    await onceByKey(actor, key, request, async () => created({ secret: 1 }));
    const other = { ...actor, userId: newId() };
    expect(await shown(await onceByKey(other, key, request, async () => created({ id: 2 })))).toEqual({ status: 201, body: { id: 2 } });
  });

  it("is forgotten after a day", async () => {
    const key = newId();
    await onceByKey(actor, key, request, async () => created({ day: 1 }));
    await database()
      .update(idempotencyKeys)
      .set({ createdAt: new Date(Date.now() - 25 * 3600_000) })
      .where(and(eq(idempotencyKeys.userId, actor.userId), eq(idempotencyKeys.key, key)));
    expect(await shown(await onceByKey(actor, key, request, async () => created({ day: 2 })))).toEqual({ status: 201, body: { day: 2 } });
  });

  it("has a form", async () => {
    for (const key of ["", "with space", "é", "x".repeat(121)]) {
      expect(await shown(await onceByKey(actor, key, request, work))).toEqual({ code: "invalid-input" });
    }
  });
});
