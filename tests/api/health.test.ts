import { eq } from "drizzle-orm";
import { afterAll, describe, expect, it } from "vitest";
import { closeDatabase, connect, database } from "@/db/connection";
import { newId } from "@/db/new-id";
import { workers } from "@/db/schema/workers";
import { readHealth } from "@/lib/health/read-health";
import { call } from "./client";

afterAll(closeDatabase);

describe("health over HTTP", () => {
  it("answers 200 when a worker was heard of lately", async () => {
    const now = new Date();
    const id = newId();
    await database().insert(workers).values({ id, threads: 1, startedAt: now, heartbeatAt: now });
    const response = await call("GET", "/api/v1/health");
    expect(response.status).toBe(200);
    expect(await response.json()).toEqual({ status: "ok", database: "ok", worker: "ok" });
    expect(response.headers.get("cache-control")).toContain("no-store");
    await database().delete(workers).where(eq(workers.id, id));
  });
});

describe("health", () => {
  const shared = globalThis as typeof globalThis & { strandlineDatabase?: ReturnType<typeof connect> };
  const url = new URL(process.env.DATABASE_URL ?? "");

  it("names the worker when none was heard of for half a minute", async () => {
    const later = new Date(Date.now() + 3600_000);
    expect(await readHealth(later)).toEqual({ status: "starting", database: "ok", worker: "missing" });
  });

  it("names a database that does not answer", async () => {
    await closeDatabase();
    url.port = "1";
    shared.strandlineDatabase = connect(url.href);
    expect(await readHealth()).toEqual({ status: "unavailable", database: "unreachable", worker: "unknown" });
    await closeDatabase();
  });
});
