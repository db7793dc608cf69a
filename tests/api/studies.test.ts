import { beforeAll, describe, expect, it } from "vitest";
import { call, callJson, problemIn, type Credentials } from "./client";
import { makeGroup, makeSignedIn } from "./factories";
import { analyse, fixture, jobEnd, makeDetection, makeRun, uploadAndRead, type JobBody } from "./product";

interface StudyBody {
  id: string;
  kind: string;
  state: string;
  parameters: Record<string, unknown>;
  sentence: string | null;
  result: Record<string, unknown> | null;
}

interface SweepBody {
  baseline: { points: number; beta: { value: number } };
  combinations: unknown[];
  choices: { name: string }[];
}

let analyst: Credentials;
let reader: Credentials;
let analysisId: string;

beforeAll(async () => {
  const group = await makeGroup();
  analyst = (await makeSignedIn(group, "analyst")).credentials;
  reader = (await makeSignedIn(group, "reader")).credentials;
  const runId = await makeRun(analyst, { title: "Studied", model: "xy" });
  expect((await uploadAndRead(analyst, runId, "shots.npz", fixture("runs/straight-front-24/shots.npz"))).state).toBe("done");
  const detection = await makeDetection(analyst, runId, { method: "fixed", threshold: 4.5 });
  analysisId = await analyse(analyst, runId, { detectionId: detection.id, bootstrap: { replicates: 100, seed: 1 } });
});

async function start(json: Record<string, unknown>): Promise<{ studyId: string; jobId: string }> {
  const { study, job } = await callJson<{ study: { id: string }; job: { id: string } }>("POST", `/api/v1/analyses/${analysisId}/studies`, { as: analyst, json });
  return { studyId: study.id, jobId: job.id };
}

async function studied(json: Record<string, unknown>): Promise<{ study: StudyBody; job: JobBody }> {
  const { studyId, jobId } = await start(json);
  const job = await jobEnd(analyst, jobId);
  return { study: await callJson<StudyBody>("GET", `/api/v1/studies/${studyId}`, { as: reader }), job };
}

describe("a sensitivity sweep", () => {
  let study: StudyBody;

  beforeAll(async () => {
    ({ study } = await studied({ kind: "sweep" }));
  });

  it("answers with the saved choices first, about 200 combinations and one sentence", () => {
    expect(study.state).toBe("done");
    const sweep = study.result as unknown as SweepBody;
    expect(sweep.combinations.length).toBeGreaterThan(100);
    expect(sweep.combinations[0]).toEqual(sweep.baseline);
    expect(sweep.choices.map(({ name }) => name)).toContain("level");
    expect(study.sentence).toMatch(/combinations of choices/);
  });

  it("is the same again", async () => {
    expect((await studied({ kind: "sweep" })).study.result).toEqual(study.result);
  });

  it("can be had as CSV, a row a combination", async () => {
    const response = await call("GET", `/api/v1/studies/${study.id}?format=csv`, { as: reader });
    expect(response.headers.get("content-type")).toMatch(/^text\/csv/);
    const rows = (await response.text()).trim().split("\n").filter((line) => !line.startsWith("#"));
    expect(rows[0]).toMatch(/^threshold_shift,level,traces,method,hold/);
    expect(rows).toHaveLength(1 + (study.result as unknown as SweepBody).combinations.length);
  });

  it("is listed with its sentence and without its result", async () => {
    const { items } = await callJson<{ items: StudyBody[] }>("GET", `/api/v1/analyses/${analysisId}/studies`, { as: reader });
    const listed = items.find(({ id }) => id === study.id);
    expect(listed?.sentence).toBe(study.sentence);
    expect(listed).not.toHaveProperty("result");
  });
});

describe("the simulated studies", () => {
  it("compare with a nearest-neighbour chain and keep what was asked", async () => {
    const { study, job } = await studied({ kind: "null-front", repeats: 20, jMaxHz: 400 });
    expect(job.error).toBeNull();
    expect(study.parameters).toEqual({ kind: "null-front", model: "xy", jMaxHz: 400, repeats: 20, seed: 1 });
    expect(study.result).toMatchObject({ model: "xy", repeats: 20 });
    expect(study.sentence).toMatch(/nearest-neighbour cone/);
    expect(await callJson("GET", `/api/v1/studies/${study.id}?format=json`, { as: reader })).toMatchObject({ id: study.id });
    expect((await problemIn(await call("GET", `/api/v1/studies/${study.id}?format=csv`, { as: reader }))).status).toBe(422);
  });

  it("test an analysis on itself", async () => {
    const { study, job } = await studied({ kind: "self-test", repeats: 20, seed: 4 });
    expect(job.error).toBeNull();
    expect(study.result).toMatchObject({ repeats: 20 });
    expect(study.sentence?.length).toBeGreaterThan(20);
  });

  it("stop when they are cancelled, keep no result, and say so", async () => {
    const { studyId, jobId } = await start({ kind: "self-test", repeats: 1000 });
    await call("DELETE", `/api/v1/jobs/${jobId}`, { as: analyst });
    expect((await jobEnd(analyst, jobId)).state).toBe("cancelled");
    expect(await callJson<StudyBody>("GET", `/api/v1/studies/${studyId}`, { as: reader })).toMatchObject({ state: "cancelled", result: null, sentence: null });
  });
});

describe("a study that cannot be", () => {
  it("is refused to a reader, and for what is out of range", async () => {
    const path = `/api/v1/analyses/${analysisId}/studies`;
    expect((await problemIn(await call("POST", path, { as: reader, json: { kind: "sweep" } }))).status).toBe(403);
    expect((await problemIn(await call("POST", path, { as: analyst, json: { kind: "self-test", repeats: 19 } }))).status).toBe(422);
    expect((await problemIn(await call("POST", path, { as: analyst, json: { kind: "other" } }))).status).toBe(422);
  });

  it("is answered once for one Idempotency-Key", async () => {
    const once = () => callJson("POST", `/api/v1/analyses/${analysisId}/studies`, { as: analyst, json: { kind: "sweep" }, headers: { "idempotency-key": "one-sweep" } });
    expect(await once()).toEqual(await once());
  });
});
