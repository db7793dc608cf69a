import { readFileSync } from "node:fs";
import { gunzipSync, gzipSync } from "node:zlib";
import { fileURLToPath } from "node:url";
import { describe, expect, it } from "vitest";
import { memorySource } from "@/lib/formats/memory-source";
import { inRunOrder, readGood } from "./read-all";
import { readNpz } from "../read-npz";

const RUNS = fileURLToPath(new URL("../fixtures/runs/", import.meta.url));
const file = (path: string): Uint8Array => readFileSync(RUNS + path);

interface Expected {
  deterministic: { sites: number; times_us: number[]; shotsPerTime: number[]; setAside: number };
}

function expected(run: string): Expected["deterministic"] {
  return (JSON.parse(readFileSync(`${RUNS}${run}/expected.json`, "utf8")) as Expected).deterministic;
}

const FILES = [
  ["ising-chain-10", "shots.csv.gz"], ["ising-chain-10", "shots.npz"], ["planar-5x5", "shots.npz"], ["ragged-drift-8", "shots.csv.gz"],
  ["ragged-drift-8", "shots-long.csv.gz"], ["straight-front-24", "shots.npz"], ["xy-chain-12", "shots.csv.gz"], ["xy-chain-12", "shots.npz"],
];

describe("simulated runs", () => {
  it.each(FILES)("%s/%s has the sites, times and kept shots its makers state", async (run, name) => {
    const { sites, times_us, shotsPerTime, setAside } = expected(run);
    const { summary, shots } = await readGood(memorySource(file(`${run}/${name}`)));
    const taken = shots.filter(({ role }) => role === "shots");
    const kept = taken.filter(({ missing }) => !missing);
    expect(summary.siteNames).toHaveLength(sites);
    expect([...new Set(taken.map((shot) => shot.time_us))].sort((a, b) => a - b)).toEqual(times_us);
    expect(times_us.map((time) => kept.filter((shot) => shot.time_us === time).length)).toEqual(shotsPerTime);
    expect(taken.length - kept.length).toBe(setAside);
  });

  it.each(["ising-chain-10", "xy-chain-12"])("%s gives identical shots as CSV and as NPZ, though the CSV counts in ms", async (run) => {
    const table = await readGood(memorySource(file(`${run}/shots.csv.gz`)));
    const arrays = await readGood(memorySource(file(`${run}/shots.npz`)));
    const shots = arrays.shots.filter(({ role }) => role === "shots");
    expect(table.shots).toEqual(shots);
  });

  it("ragged-drift-8 gives identical shots with one row a shot and one row a count, in any order of rows", async () => {
    const wide = await readGood(memorySource(file("ragged-drift-8/shots.csv.gz")));
    const long = await readGood(memorySource(file("ragged-drift-8/shots-long.csv.gz")));
    expect(inRunOrder(long.shots)).toEqual(inRunOrder(wide.shots));
    const [header, ...rows] = gunzipSync(file("ragged-drift-8/shots-long.csv.gz")).toString().trim().split("\n");
    const scattered = [header, ...rows.filter((_, n) => n % 3 === 1), ...rows.filter((_, n) => n % 3 !== 1).reverse()].join("\n");
    const shuffled = await readGood(memorySource(Buffer.from(scattered)));
    expect(inRunOrder(shuffled.shots)).toEqual(inRunOrder(wide.shots));
  });

  it("gives calibration shots the same from the archive and from their own tables", async () => {
    const { shots } = await readGood(memorySource(file("ising-chain-10/shots.npz")));
    for (const role of ["calibration-dark", "calibration-bright"] as const) {
      const own = await readGood(memorySource(file(`ising-chain-10/${role}.csv.gz`)), { role });
      expect(own.shots).toHaveLength(2000);
      expect(own.shots).toEqual(shots.filter((shot) => shot.role === role));
    }
  });

  it("agrees with an independent reader of arrays, positions included", async () => {
    const { summary, shots } = await readGood(memorySource(file("planar-5x5/shots.npz")));
    const arrays = readNpz(`${RUNS}planar-5x5/shots.npz`);
    expect(shots.flatMap(({ counts }) => counts)).toEqual(Array.from(arrays.counts.values));
    expect(summary.positions?.flat()).toEqual(Array.from(arrays.positions.values));
  });

  it("reads a gzipped archive as the archive", async () => {
    const plain = await readGood(memorySource(file("xy-chain-12/shots.npz")));
    const packed = await readGood(memorySource(gzipSync(file("xy-chain-12/shots.npz"))));
    expect(packed).toEqual(plain);
  });

  it("keeps every batch within 4096 shots and about a mebibyte", async () => {
    const { batches } = await readGood(memorySource(file("straight-front-24/shots.npz")));
    expect(batches.every(({ shots, counts }) => shots <= 4096 && counts.byteLength <= 1_048_576)).toBe(true);
    expect(batches.length).toBeGreaterThan(4);
  });
});
