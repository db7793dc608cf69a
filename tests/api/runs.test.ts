import { eq } from "drizzle-orm";
import { beforeAll, describe, expect, it } from "vitest";
import { database } from "@/db/connection";
import { analyses } from "@/db/schema/analyses";
import { archives } from "@/db/schema/archives";
import { blobs } from "@/db/schema/blobs";
import { detections } from "@/db/schema/detections";
import { jobs } from "@/db/schema/jobs";
import { resultArrays } from "@/db/schema/result-arrays";
import { runVersions } from "@/db/schema/run-versions";
import { shotBlocks } from "@/db/schema/shot-blocks";
import { siteHistograms } from "@/db/schema/site-histograms";
import { call, callJson, problemIn, type Credentials } from "./client";
import { makeGroup, makeSignedIn, type SignedInMember } from "./factories";
import { analyse, fixture, makeDetection, makeRun, uploadAndRead } from "./product";

let member: SignedInMember;
let as: Credentials;

beforeAll(async () => {
  member = await makeSignedIn(await makeGroup(), "analyst");
  as = member.credentials;
});

interface RunBody {
  id: string;
  title: string;
  positions: number[][] | null;
  createdAt: string;
}

async function readRun(): Promise<string> {
  const runId = await makeRun(as);
  await uploadAndRead(as, runId, "plain.csv", fixture("malformed/plain.csv"));
  return runId;
}

describe("runs", () => {
  it("are listed newest first, page by page, without gaps or repeats", async () => {
    const lister = await makeSignedIn(await makeGroup(), "contributor");
    const made: string[] = [];
    for (let q = 0; q < 7; q++) made.push(await makeRun(lister.credentials, { title: `Night ${q}` }));
    const seen: string[] = [];
    let cursor: string | null = "";
    while (cursor !== null) {
      const page: { items: RunBody[]; nextCursor: string | null } = await callJson("GET", `/api/v1/runs?limit=3${cursor && `&cursor=${cursor}`}`, { as: lister.credentials });
      seen.push(...page.items.map(({ id }) => id));
      cursor = page.nextCursor;
    }
    expect(seen).toEqual(made.reverse());
  });

  it("take positions as numbers or pairs", async () => {
    const chain = await callJson<RunBody>("POST", "/api/v1/runs", { as, json: { title: "Chain", positions: [0, 1.1, 2] } });
    expect(chain.positions).toEqual([[0], [1.1], [2]]);
    const plane = await callJson<RunBody>("POST", "/api/v1/runs", { as, json: { title: "Plane", positions: [[0, 0], [1, 0]] } });
    expect(plane.positions).toEqual([[0, 0], [1, 0]]);
  });

  it.each([
    [{ title: "" }, "title"],
    [{ title: "x", positions: [1, 1] }, "positions"],
    [{ title: "x", alpha: "steep" }, "alpha"],
    [{ title: "x", brightIs: "left" }, "brightIs"],
    [{ title: "x", colour: "red" }, "colour"],
  ])("with %j are refused at %s", async (json, where) => {
    const problem = await problemIn(await call("POST", "/api/v1/runs", { as, json }));
    expect(problem.status).toBe(422);
    expect(problem.errors?.map((place) => place.where)).toContain(where);
  });

  it("whose positions do not fit the sites are refused, before and after reading", async () => {
    const runId = await makeRun(as, { positions: [0, 1, 2] });
    const job = await uploadAndRead(as, runId, "plain.csv", fixture("malformed/plain.csv"));
    expect(job.state).toBe("failed");
    expect(job.error?.errors?.[0].where).toBe("positions");
    const ready = await readRun();
    const problem = await problemIn(await call("PATCH", `/api/v1/runs/${ready}`, { as, json: { positions: [0, 1] } }));
    expect(problem.errors?.[0].where).toBe("positions");
  });

  it("change their metadata only", async () => {
    const runId = await readRun();
    const changed = await callJson<RunBody & { shotsPerTime: number[]; alpha: number }>("PATCH", `/api/v1/runs/${runId}`, { as, json: { title: "Renamed", alpha: 1.2 } });
    expect(changed).toMatchObject({ title: "Renamed", alpha: 1.2, shotsPerTime: [20, 20, 20] });
  });

  it("are removed with everything that hangs on them, but not with bytes another run uses", async () => {
    const [first, second] = [await readRun(), await readRun()];
    const detection = await makeDetection(as, first, { method: "fixed", threshold: 4.5 });
    const analysisId = await analyse(as, first, { detectionId: detection.id, bootstrap: { replicates: 100 } });
    expect((await call("DELETE", `/api/v1/runs/${first}`, { as })).status).toBe(204);
    for (const table of [archives, detections, analyses, jobs, runVersions, shotBlocks, siteHistograms]) {
      expect(await database().select().from(table).where(eq(table.runId, first))).toEqual([]);
    }
    expect(await database().select().from(resultArrays).where(eq(resultArrays.analysisId, analysisId))).toEqual([]);
    expect((await call("GET", `/api/v1/runs/${first}`, { as })).status).toBe(404);
    const [archive] = await database().select().from(archives).where(eq(archives.runId, second));
    expect(await database().select().from(blobs).where(eq(blobs.id, archive.blobId))).toHaveLength(1);
    expect((await call("GET", `/api/v1/archives/${archive.id}/raw`, { as })).status).toBe(200);
  });

  it("are made once for an idempotency key", async () => {
    const headers = { "idempotency-key": `night-${Date.now()}` };
    const first = await callJson<RunBody>("POST", "/api/v1/runs", { as, json: { title: "Once" }, headers });
    const second = await callJson<RunBody>("POST", "/api/v1/runs", { as, json: { title: "Once" }, headers });
    expect(second.id).toBe(first.id);
    expect((await call("POST", "/api/v1/runs", { as, json: { title: "Other" }, headers })).status).toBe(409);
  });
});

describe("detections and analyses", () => {
  it("are numbered without gaps or repeats when many are made at once", async () => {
    const runId = await readRun();
    const made = await Promise.all(Array.from({ length: 10 }, () => makeDetection(as, runId, { method: "fixed", threshold: 4.5 })));
    expect(made.map(({ number }) => number).sort((low, high) => low - high)).toEqual([1, 2, 3, 4, 5, 6, 7, 8, 9, 10]);
    const started = await Promise.all(
      Array.from({ length: 10 }, () =>
        callJson<{ analysis: { number: number } }>("POST", `/api/v1/runs/${runId}/analyses`, { as, json: { detectionId: made[0].id, bootstrap: { replicates: 50 } } }),
      ),
    );
    expect(started.map(({ analysis }) => analysis.number).sort((low, high) => low - high)).toEqual([1, 2, 3, 4, 5, 6, 7, 8, 9, 10]);
  });

  it("refuse what could not work, with the field named", async () => {
    const runId = await readRun();
    const { id: detectionId } = await makeDetection(as, runId, { method: "fixed", threshold: 4.5 });
    const refusals: [Record<string, unknown>, string][] = [
      [{ detectionId, traces: { kind: "reference", site: 4 } }, "traces.site"],
      [{ detectionId, traces: { kind: "distance", bulk: [0, 9] } }, "traces.bulk"],
      [{ detectionId, bootstrap: { replicates: 10 } }, "bootstrap.replicates"],
      [{ detectionId, front: { level: 1.5 } }, "front.level"],
      [{ detectionId: "0".repeat(24) }, "detectionId"],
    ];
    for (const [json, where] of refusals) {
      const problem = await problemIn(await call("POST", `/api/v1/runs/${runId}/analyses`, { as, json }));
      expect([problem.status, problem.errors?.[0].where]).toEqual([422, where]);
    }
    const empty = await makeRun(as);
    expect((await call("POST", `/api/v1/runs/${empty}/detections`, { as, json: { method: "mixture" } })).status).toBe(409);
  });

  it("stand when the run is read anew, and say that they are stale", async () => {
    const runId = await readRun();
    const detection = await makeDetection(as, runId, { method: "fixed", threshold: 4.5 });
    const more = "time_us,shot,site_0,site_1,site_2,site_3\n40,0,1,2,3,4\n40,1,1,2,3,9\n";
    expect((await uploadAndRead(as, runId, "more.csv", new TextEncoder().encode(more))).state).toBe("done");
    const run = await callJson<{ version: number; times_us: number[] }>("GET", `/api/v1/runs/${runId}`, { as });
    expect(run).toMatchObject({ version: 2, times_us: [5, 10, 20, 40] });
    const kept = await callJson<{ stale: boolean; runVersion: number }>("GET", `/api/v1/detections/${detection.id}`, { as });
    expect(kept).toMatchObject({ stale: true, runVersion: 1 });
    const analysisId = await analyse(as, runId, { detectionId: detection.id, bootstrap: { replicates: 100 } });
    const { times_us } = await callJson<{ times_us: number[] }>("GET", `/api/v1/analyses/${analysisId}/traces`, { as });
    expect(times_us).toEqual([5, 10, 20]);
  });

  it("read fractional counts as they are, and a bright site as down when the run says so", async () => {
    const results: { mean: number[][]; value: number[][] }[] = [];
    for (const [file, brightIs] of [["plain.csv", "up"], ["fractional.csv", "up"], ["plain.csv", "down"]] as const) {
      const runId = await makeRun(as, { brightIs });
      await uploadAndRead(as, runId, file, fixture(`malformed/${file}`));
      const detection = await makeDetection(as, runId, { method: "fixed", threshold: 4.5 });
      const analysisId = await analyse(as, runId, { detectionId: detection.id, bootstrap: { replicates: 100 } });
      results.push(await callJson("GET", `/api/v1/analyses/${analysisId}/correlators`, { as }));
    }
    const [whole, fractional, down] = results;
    // fractional.csv is plain.csv with a quarter of a count added everywhere, which moves no count over 4.5.
    expect(fractional.value).toEqual(whole.value);
    down.mean.flat().forEach((mean, at) => expect(mean).toBeCloseTo(-whole.mean.flat()[at], 13));
    down.value.flat().forEach((value, at) => expect(value).toBeCloseTo(whole.value.flat()[at], 13));
    expect(whole.value.flat().some((value) => value !== 0)).toBe(true);
  });

  it("by distance, unbiased and with BCa intervals hold together", async () => {
    const runId = await readRun();
    const detection = await makeDetection(as, runId, { method: "fixed", threshold: 4.5 });
    const plugIn = await analyse(as, runId, { detectionId: detection.id, bootstrap: { replicates: 400 }, traces: { kind: "distance" } });
    const unbiased = await analyse(as, runId, { detectionId: detection.id, estimator: "unbiased", bootstrap: { replicates: 400, interval: "bca" }, traces: { kind: "distance", bulk: [0, 1, 2] } });
    const correlators = (id: string) => callJson<{ value: number[][]; low: number[][]; high: number[][]; pairs: [number, number][] }>("GET", `/api/v1/analyses/${id}/correlators`, { as });
    const [first, second] = [await correlators(plugIn), await correlators(unbiased)];
    // 20 shots a time: M/(M − 1) = 20/19.
    first.value.flat().forEach((value, at) => expect(second.value.flat()[at]).toBeCloseTo((value * 20) / 19, 12));
    const traces = (id: string) => callJson<{ distances: number[]; value: number[][] }>("GET", `/api/v1/analyses/${id}/traces`, { as });
    const all = await traces(plugIn);
    expect(all.distances).toEqual([1, 2, 3]);
    const neighbours = first.pairs.flatMap(([i, j], pair) => (j - i === 1 ? [pair] : []));
    all.value[0].forEach((value, k) => expect(value).toBeCloseTo(neighbours.reduce((sum, pair) => sum + first.value[k][pair], 0) / 3, 12));
    expect((await traces(unbiased)).distances).toEqual([1, 2]);
  });
});
