import { createHash } from "node:crypto";
import { and, eq } from "drizzle-orm";
import { beforeAll, describe, expect, it } from "vitest";
import { database } from "@/db/connection";
import { runVersions } from "@/db/schema/run-versions";
import { loadSlot } from "@/lib/runs/load-counts";
import { call, callJson, problemIn, type Credentials } from "./client";
import { makeGroup, makeSignedIn } from "./factories";
import { fixture, makeRun, uploadAndRead } from "./product";

let as: Credentials;

beforeAll(async () => {
  as = (await makeSignedIn(await makeGroup(), "contributor")).credentials;
});

const SMALL = "time_us,shot,left,right\n10,1,0,7\n5,0,2,9\n10,0,4,5\n5,1,2,\n5,2,3,9\n";

async function runOf(filename: string, bytes: Uint8Array<ArrayBuffer>): Promise<string> {
  const runId = await makeRun(as);
  expect((await uploadAndRead(as, runId, filename, bytes)).state).toBe("done");
  return runId;
}

/** One hash over all kept shots of a run's first version: times, shot numbers and counts in order. */
async function shotsHash(runId: string): Promise<string> {
  const [version] = await database().select().from(runVersions).where(and(eq(runVersions.runId, runId), eq(runVersions.number, 1)));
  const hash = createHash("sha256");
  for (const [k, slot] of version.timeSlots.entries()) {
    const { shotNumbers, counts } = await loadSlot(database(), { runId, version: 1 }, slot, version.sites);
    hash.update(`${version.timesUs[k]}:`).update(new Uint8Array(shotNumbers.buffer)).update(new Uint8Array(counts.buffer));
  }
  return hash.digest("hex");
}

describe("the forms of one run", () => {
  it.each([
    ["xy-chain-12", ["shots.csv.gz", "shots.npz"]],
    ["ising-chain-10", ["shots.csv.gz", "shots.npz"]],
    ["ragged-drift-8", ["shots.csv.gz", "shots-long.csv.gz"]],
  ])("%s: %j give the same shots to the byte", async (run, forms) => {
    const hashes: string[] = [];
    for (const form of forms) hashes.push(await shotsHash(await runOf(form, fixture(`runs/${run}/${form}`))));
    expect(hashes[0]).toHaveLength(64);
    expect(new Set(hashes).size).toBe(1);
  });

  it("sent as several archives, one a time, give the same times and counts", async () => {
    const runId = await makeRun(as);
    const [head, ...rows] = SMALL.trimEnd().split("\n");
    for (const time of ["10", "5"]) {
      const part = [head, ...rows.filter((row) => row.startsWith(`${time},`))].join("\n");
      expect((await uploadAndRead(as, runId, `${time}.csv`, new TextEncoder().encode(`${part}\n`))).state).toBe("done");
    }
    const whole = await runOf("whole.csv", new TextEncoder().encode(`# whole\n${SMALL}`));
    const figures = async (id: string) => callJson<{ times_us: number[]; brightness: number[][] }>("GET", `/api/v1/runs/${id}/brightness`, { as });
    const [parts, one] = [await figures(runId), await figures(whole)];
    expect(parts.times_us).toEqual([5, 10]);
    expect(parts.brightness).toEqual(one.brightness);
  });
});

describe("what a run shows of its shots", () => {
  let runId: string;

  beforeAll(async () => {
    runId = await runOf("small.csv", new TextEncoder().encode(SMALL));
  });

  it("is the brightness of the kept shots, by hand", async () => {
    const shown = await callJson("GET", `/api/v1/runs/${runId}/brightness`, { as });
    expect(shown).toEqual({ version: 1, siteNames: ["left", "right"], times_us: [5, 10], brightness: [[2.5, 9], [2, 6]] });
  });

  it("is how often each count occurs, without shots that were set aside", async () => {
    const all = await callJson<{ sites: { site: number; name: string; counts: number[] }[] }>("GET", `/api/v1/runs/${runId}/histograms`, { as });
    expect(all.sites).toEqual([
      { site: 0, name: "left", firstBin: 0, counts: [1, 0, 1, 1, 1] },
      { site: 1, name: "right", firstBin: 0, counts: [0, 0, 0, 0, 0, 1, 0, 1, 0, 2] },
    ]);
    const one = await callJson<{ sites: unknown[] }>("GET", `/api/v1/runs/${runId}/histograms?site=1`, { as });
    expect(one.sites).toEqual(all.sites.slice(1));
  });

  it("names a site that it does not have", async () => {
    const problem = await problemIn(await call("GET", `/api/v1/runs/${runId}/histograms?site=2`, { as }));
    expect([problem.status, problem.errors?.[0].where]).toEqual([422, "site"]);
  });

  it("keeps calibration shots apart from times and histograms of shots", async () => {
    const dark = await uploadAndRead(as, runId, "dark.csv", new TextEncoder().encode("shot,left,right\n0,0,1\n1,1,0\n2,0,0\n"), { role: "calibration-dark" });
    expect(dark.state).toBe("done");
    const run = await callJson<Record<string, unknown>>("GET", `/api/v1/runs/${runId}`, { as });
    expect(run).toMatchObject({ version: 2, times_us: [5, 10], shotsPerTime: [2, 2], shotsSetAside: { missing: 1 }, calibrationDarkShots: 3, calibrationBrightShots: 0 });
    const histograms = await callJson<{ sites: { counts: number[] }[] }>("GET", `/api/v1/runs/${runId}/histograms?role=calibration-dark`, { as });
    expect(histograms.sites.map(({ counts }) => counts)).toEqual([[2, 1], [2, 1]]);
  });

  it("is nothing before the first archive", async () => {
    const empty = await makeRun(as);
    expect(await callJson("GET", `/api/v1/runs/${empty}/histograms`, { as })).toEqual({ version: 0, sites: [] });
    expect(await callJson("GET", `/api/v1/runs/${empty}/brightness`, { as })).toMatchObject({ version: 0, times_us: [], brightness: [] });
  });
});

describe("an archive that does not fit the run", () => {
  it("is refused by name, and the run stays as it was", async () => {
    const runId = await runOf("two-sites.csv", new TextEncoder().encode(`# two sites\n${SMALL}`));
    const job = await uploadAndRead(as, runId, "three-sites.csv", new TextEncoder().encode("time_us,a,b,c\n5,1,2,3\n"));
    expect(job.state).toBe("failed");
    expect(job.error?.errors?.[0]).toEqual({ where: "three-sites.csv", message: "has 3 sites, but the archives before it have 2" });
    const run = await callJson<{ archives: { filename: string; state: string }[] }>("GET", `/api/v1/runs/${runId}`, { as });
    expect(run).toMatchObject({ status: "ready", version: 1, sites: 2 });
    expect(run.archives.map(({ state }) => state)).toEqual(["read", "refused"]);
  });
});
