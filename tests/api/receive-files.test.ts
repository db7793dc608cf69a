import { eq } from "drizzle-orm";
import { beforeAll, describe, expect, it } from "vitest";
import { database } from "@/db/connection";
import { newId } from "@/db/new-id";
import { archives } from "@/db/schema/archives";
import { blobChunks, blobs } from "@/db/schema/blobs";
import { receiveFiles } from "@/lib/archives/receive-files";
import { call, callJson, problemIn, type Credentials } from "./client";
import { makeGroup, makeSignedIn, type SignedInMember } from "./factories";
import { jobEnd, makeRun, type UploadBody } from "./product";

let member: SignedInMember;
let as: Credentials;

beforeAll(async () => {
  member = await makeSignedIn(await makeGroup(), "contributor");
  as = member.credentials;
});

const blobsOf = (groupId: string) => database().select().from(blobs).where(eq(blobs.groupId, groupId));
const csv = (comment: string, time_us: number) => `# ${comment}\ntime_us,shot,a,b\n${time_us},0,1,9\n${time_us},1,0,8\n`;

function formOf(files: [name: string, text: string][], field = "file"): FormData {
  const form = new FormData();
  for (const [name, text] of files) form.append(field, new File([text], name));
  return form;
}

describe("a form of several files", () => {
  it("keeps their order, however long each takes to store", async () => {
    const runId = await makeRun(as);
    const long = `${"# a long comment\n".repeat(300_000)}${csv("long", 5)}`;
    const files: [string, string][] = [["z-long.csv", long], ["a-short.csv", csv("short", 10)], ["m-long.csv", `#\n${long.replaceAll("\n5,", "\n15,")}`], ["b-short.csv", csv("short", 20)]];
    const sent = await callJson<UploadBody>("POST", `/api/v1/runs/${runId}/archives`, { as, body: formOf(files) });
    expect(sent.archives.map(({ filename }) => filename)).toEqual(files.map(([name]) => name));
    expect((await jobEnd(as, sent.job?.id ?? "")).state).toBe("done");
    const run = await callJson<{ times_us: number[]; archives: { filename: string; state: string }[] }>("GET", `/api/v1/runs/${runId}`, { as });
    expect(run.archives.map(({ filename }) => filename)).toEqual(files.map(([name]) => name));
    expect(run.times_us).toEqual([5, 10, 15, 20]);
  });

  it("takes the same bytes twice in one form as one archive", async () => {
    const runId = await makeRun(as);
    const sent = await callJson<UploadBody>("POST", `/api/v1/runs/${runId}/archives`, { as, body: formOf([["one.csv", csv("twin", 5)], ["two.csv", csv("twin", 5)]]) });
    expect(sent.archives[1].id).toBe(sent.archives[0].id);
    expect(await database().select().from(archives).where(eq(archives.runId, runId))).toHaveLength(1);
  });

  it("of more files than one request takes is refused whole: no file is left out silently", async () => {
    const { groupId, credentials } = await makeSignedIn(await makeGroup(), "contributor");
    const runId = await makeRun(credentials);
    const form = formOf(Array.from({ length: 101 }, (_, q) => [`${q}.csv`, csv(String(q), q)]));
    const problem = await problemIn(await call("POST", `/api/v1/runs/${runId}/archives`, { as: credentials, body: form }));
    expect([problem.status, problem.errors?.[0].where]).toEqual([413, "file"]);
    expect(await blobsOf(groupId)).toEqual([]);
  });

  it("with one empty file among others is refused whole, and names it", async () => {
    const { groupId, credentials } = await makeSignedIn(await makeGroup(), "contributor");
    const form = formOf([["good.csv", csv("good", 5)], ["hollow.csv", ""]]);
    const problem = await problemIn(await call("POST", `/api/v1/runs/${await makeRun(credentials)}/archives`, { as: credentials, body: form }));
    expect(problem.status).toBe(422);
    expect(problem.errors?.[0].where).toContain("hollow.csv");
    expect(await blobsOf(groupId)).toEqual([]);
  });

  it.each([
    ["without a file", "multipart/form-data; boundary=x", "--x--\r\n", 422, "file"],
    ["that is cut off", "multipart/form-data; boundary=x", '--x\r\ncontent-disposition: form-data; name="file"; filename="a.csv"\r\n\r\n1,2', 400, "body"],
    ["without a boundary", "multipart/form-data", "1,2", 400, "content-type"],
  ])("%s is refused", async (_, type, body, status, where) => {
    const problem = await problemIn(await call("POST", `/api/v1/runs/${await makeRun(as)}/archives`, { as, body, headers: { "content-type": type } }));
    expect([problem.status, problem.errors?.[0].where]).toEqual([status, where]);
  });
});

describe("a file that cannot be stored", () => {
  // The database refuses bytes of a group that does not exist.
  it.each([
    ["as a form", () => ({ body: formOf([["a.csv", "7".repeat(3_000_000)], ["b.csv", "8".repeat(3_000_000)]]) })],
    ["as a raw body", () => ({ body: "7".repeat(3_000_000) })],
  ])("ends the request at once, and nothing of it is kept: %s", async (_, sent) => {
    const groupId = newId();
    const request = new Request("http://127.0.0.1/", { method: "POST", ...sent() });
    await expect(receiveFiles({ groupId }, request, "a.csv")).rejects.toThrow();
    expect(await blobsOf(groupId)).toEqual([]);
  }, 10_000);
});

describe("a stored file", () => {
  it("lies in chunks of 1 MiB, numbered without gaps", async () => {
    const { groupId, credentials } = await makeSignedIn(await makeGroup(), "contributor");
    const bytes = 3 * 1024 * 1024 + 17;
    await call("POST", `/api/v1/runs/${await makeRun(credentials)}/archives?filename=a.csv`, { as: credentials, body: new Uint8Array(bytes).fill(55) });
    const [blob] = await blobsOf(groupId);
    expect(blob).toMatchObject({ bytes, complete: true });
    const chunks = await database().select().from(blobChunks).where(eq(blobChunks.blobId, blob.id)).orderBy(blobChunks.seq);
    expect(chunks.map(({ seq, data }) => [seq, data.length])).toEqual([[0, 1048576], [1, 1048576], [2, 1048576], [3, 17]]);
  });
});
