import { createHash } from "node:crypto";
import http from "node:http";
import { setTimeout as sleep } from "node:timers/promises";
import { and, eq } from "drizzle-orm";
import { beforeAll, describe, expect, it } from "vitest";
import { database } from "@/db/connection";
import { blobs } from "@/db/schema/blobs";
import { call, callJson, problemIn, testUrl, type Credentials } from "./client";
import { makeGroup, makeSignedIn, type SignedInMember } from "./factories";
import { fixture, jobEnd, makeRun, upload, type JobBody, type UploadBody } from "./product";

let member: SignedInMember;
let as: Credentials;

beforeAll(async () => {
  member = await makeSignedIn(await makeGroup(), "contributor");
  as = member.credentials;
});

const CSV = "time_us,shot,a,b\n5,0,1,9\n5,1,0,8\n10,0,2,7\n10,1,0,9\n";
const bytesOf = (text: string) => new TextEncoder().encode(text);
const blobsOf = (groupId: string) => database().select().from(blobs).where(eq(blobs.groupId, groupId));

describe("an upload", () => {
  it("is acknowledged with its length and SHA-256, and comes back byte for byte", async () => {
    const runId = await makeRun(as);
    const bytes = fixture("runs/xy-chain-12/shots.npz");
    const { archives } = await upload(as, runId, "shots.npz", bytes);
    expect(archives[0].sha256).toBe(createHash("sha256").update(bytes).digest("hex"));
    expect(archives[0].bytes).toBe(bytes.length);
    const raw = await call("GET", `/api/v1/archives/${archives[0].id}/raw`, { as });
    expect(raw.headers.get("repr-digest")).toBe(`sha-256=:${createHash("sha256").update(bytes).digest("base64")}:`);
    expect(Buffer.from(await raw.arrayBuffer()).equals(Buffer.from(bytes))).toBe(true);
    const again = await call("GET", `/api/v1/archives/${archives[0].id}/raw`, { as, headers: { "if-none-match": raw.headers.get("etag") ?? "" } });
    expect(again.status).toBe(304);
  });

  it("takes several files of a multipart form as one reading", async () => {
    const runId = await makeRun(as);
    const form = new FormData();
    form.append("file", new File([CSV], "first.csv"));
    form.append("file", new File([CSV.replaceAll("\n5,", "\n15,").replaceAll("\n10,", "\n20,")], "second.csv"));
    const sent = await callJson<UploadBody>("POST", `/api/v1/runs/${runId}/archives`, { as, body: form });
    expect(sent.archives.map(({ filename }) => filename)).toEqual(["first.csv", "second.csv"]);
    expect((await jobEnd(as, sent.job?.id ?? "")).state).toBe("done");
    const run = await callJson<{ times_us: number[] }>("GET", `/api/v1/runs/${runId}`, { as });
    expect(run.times_us).toEqual([5, 10, 15, 20]);
  });

  it("of the same bytes again is a duplicate, and nothing is stored twice", async () => {
    const runId = await makeRun(as);
    const bytes = bytesOf(`${CSV}15,0,1,1\n`);
    const first = await upload(as, runId, "a.csv", bytes);
    await jobEnd(as, first.job?.id ?? "");
    const stored = (await blobsOf(member.groupId)).length;
    const response = await call("POST", `/api/v1/runs/${runId}/archives?filename=b.csv`, { as, body: bytes });
    expect(response.status).toBe(200);
    const second = (await response.json()) as UploadBody;
    expect(second.duplicate).toBe(true);
    expect(second.archives[0].id).toBe(first.archives[0].id);
    expect(await blobsOf(member.groupId)).toHaveLength(stored);
  });

  it("of the same bytes by eight at once ends in one blob and no fault", async () => {
    const bytes = bytesOf(`${CSV}16,0,1,1\n`);
    const runIds = await Promise.all(Array.from({ length: 8 }, () => makeRun(as)));
    const answers = await Promise.all(runIds.map((runId) => call("POST", `/api/v1/runs/${runId}/archives?filename=same.csv`, { as, body: bytes })));
    expect(answers.map(({ status }) => status)).toEqual(new Array(8).fill(202));
    const sha256 = createHash("sha256").update(bytes).digest("hex");
    expect(await database().select().from(blobs).where(and(eq(blobs.groupId, member.groupId), eq(blobs.sha256, sha256)))).toHaveLength(1);
  });

  it("shares nothing with another group that has the same bytes", async () => {
    const stranger = await makeSignedIn(await makeGroup(), "contributor");
    const bytes = bytesOf(`${CSV}17,0,1,1\n`);
    const ours = await upload(as, await makeRun(as), "a.csv", bytes);
    const theirs = await upload(stranger.credentials, await makeRun(stranger.credentials), "a.csv", bytes);
    expect(theirs.duplicate).toBe(false);
    expect(theirs.archives[0].id).not.toBe(ours.archives[0].id);
    expect((await call("GET", `/api/v1/archives/${ours.archives[0].id}/raw`, { as: stranger.credentials })).status).toBe(404);
  });

  it("that breaks off leaves nothing behind", async () => {
    const { groupId, credentials } = await makeSignedIn(await makeGroup(), "contributor");
    const runId = await makeRun(credentials);
    await new Promise<void>((resolve) => {
      const request = http.request(`${testUrl()}/api/v1/runs/${runId}/archives?filename=half.csv`, {
        method: "POST",
        headers: { cookie: credentials.cookie ?? "", "content-length": 50_000_000, "content-type": "application/octet-stream" },
      });
      request.on("error", () => resolve());
      request.write(Buffer.alloc(5_000_000, "7"));
      setTimeout(() => request.destroy(), 400);
    });
    for (let wait = 0; wait < 50 && (await blobsOf(groupId)).length > 0; wait++) await sleep(100);
    expect(await blobsOf(groupId)).toEqual([]);
    const run = await callJson<{ status: string; archives: unknown[] }>("GET", `/api/v1/runs/${runId}`, { as: credentials });
    expect(run).toMatchObject({ status: "empty", archives: [] });
  });

  it("without a byte is refused with its name", async () => {
    const response = await call("POST", `/api/v1/runs/${await makeRun(as)}/archives?filename=empty.csv`, { as, body: new Uint8Array(0) });
    const problem = await problemIn(response);
    expect(problem.status).toBe(422);
    expect(problem.errors?.[0].where).toContain("empty.csv");
  });

  it.each([
    ["../../etc/passwd", "passwd"],
    ["C:\\nights\\one.csv", "one.csv"],
    ['a "quoted" name.csv', 'a "quoted" name.csv'],
    ["Nacht 🌊.csv", "Nacht 🌊.csv"],
    ["x".repeat(400), "x".repeat(300)],
    ["..", "archive"],
  ])("named %s is kept as %s", async (given, kept) => {
    const { archives } = await upload(as, await makeRun(as), given, bytesOf(CSV));
    expect(archives[0].filename).toBe(kept);
    const raw = await call("GET", `/api/v1/archives/${archives[0].id}/raw`, { as });
    expect(raw.headers.get("content-disposition")).toContain(`filename*=UTF-8''${encodeURIComponent(kept).slice(0, 40).replace(/%22.*/, "")}`);
  });

  it.each([
    ["role=theory", "role"],
    ["times_us=5,4", "times_us"],
    ["times_us=a,b", "times_us"],
  ])("with ?%s is refused at %s", async (query, where) => {
    const problem = await problemIn(await call("POST", `/api/v1/runs/${await makeRun(as)}/archives?filename=a.csv&${query}`, { as, body: bytesOf(CSV) }));
    expect(problem.status).toBe(422);
    expect(problem.errors?.[0].where).toBe(where);
  });

  it("of an NPY without times can be sent again with them", async () => {
    const runId = await makeRun(as);
    const bytes = fixture("malformed/fortran.npy");
    const first = await upload(as, runId, "f.npy", bytes);
    expect((await jobEnd(as, first.job?.id ?? "")).error?.errors?.[0].where).toContain("times_us");
    const second = await upload(as, runId, "f.npy", bytes, { times_us: "5,10,20" });
    expect(second.duplicate).toBe(false);
    expect((await jobEnd(as, second.job?.id ?? "")).state).toBe("done");
  });
});

describe("the events of a job", () => {
  it("end with its final state", async () => {
    const { job } = await upload(as, await makeRun(as), "a.csv", bytesOf(`${CSV}18,0,1,1\n`));
    const response = await call("GET", `/api/v1/jobs/${job?.id}/events`, { as });
    expect(response.headers.get("content-type")).toContain("text/event-stream");
    const events = (await response.text()).split("\n\n").filter((block) => block.startsWith("event: progress"));
    const last = JSON.parse(events[events.length - 1].split("data: ")[1]) as JobBody;
    expect(last.state).toBe("done");
  });
});
