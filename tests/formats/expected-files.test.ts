import { readFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import { describe, expect, it } from "vitest";
import { memorySource } from "@/lib/formats/memory-source";
import type { ReadOptions } from "@/lib/formats/shot-batch";
import { isProblem } from "@/lib/problem";
import { inRunOrder, readAll, readGood } from "./read-all";

const FOLDER = fileURLToPath(new URL("../fixtures/malformed/", import.meta.url));
const LATER = /\.(h5|zip)$/;
const ROWS = readFileSync(`${FOLDER}EXPECT.csv`, "utf8").trim().split("\n").slice(1).map((line) => {
  const [, file, outcome, what, where] = /^([^,]*),([^,]*),"?(.*?)"?,"?([^"]*)"?$/.exec(line) ?? [];
  return { file, outcome, what, where };
});

function options(file: string): Partial<ReadOptions> {
  return { filename: file, times_us: file.endsWith(".npy") ? [5, 10, 20] : null };
}

async function read(file: string): ReturnType<typeof readAll> {
  return readAll(memorySource(readFileSync(FOLDER + file)), options(file));
}

describe("every file of the list", () => {
  it("has the list as long as it is known to be", () => {
    expect(ROWS).toHaveLength(53);
    expect(ROWS.every(({ file, outcome }) => file !== undefined && (outcome === "ok" || outcome === "error"))).toBe(true);
  });

  it.each(ROWS.filter(({ file, outcome }) => outcome === "ok" && !LATER.test(file)))("$file is read: $what", async ({ file }) => {
    const { shots } = await readGood(memorySource(readFileSync(FOLDER + file)), options(file));
    expect(shots).toHaveLength(file === "one-shot.csv" ? 3 : 60);
  });

  it.each(ROWS.filter(({ file, outcome }) => outcome === "error" && !LATER.test(file)))("$file is refused at $where: $what", async ({ file, where }) => {
    const answer = await read(file);
    if (!isProblem(answer)) throw new Error("was read");
    const places = answer.errors.map((place) => place.where).join("; ");
    const expected = /^(line|header)/.test(where) && file.endsWith(".csv") ? `${file} ${where}` : where;
    if (where.endsWith("[")) expect(places).toMatch(/^counts\[\d+\]\[\d+\]\[\d+\]$/);
    else expect(places).toBe(expected);
  });

  it.each(ROWS.filter(({ file }) => LATER.test(file)))("$file is of a kind that is not read yet, and says so", async ({ file }) => {
    const answer = await read(file);
    if (!isProblem(answer)) throw new Error("was read");
    expect(answer.code).toBe("unknown-format");
    expect(answer.errors[0].where).toBe("file");
    expect(answer.detail).toMatch(/HDF5|ZIP/);
  });
});

describe("the plain run in other forms", () => {
  const SAME = ["crlf.csv", "utf8-bom.csv", "shuffled-rows.csv", "comments.csv", "semicolon.csv", "quoted-headers.csv", "no-final-newline.csv",
    "two-members.csv.gz", "fortran.npy", "big-endian.npz", "int64.npz", "formula.csv"];

  it.each(SAME)("%s gives the same shots", async (file) => {
    const plain = await readGood(memorySource(readFileSync(`${FOLDER}plain.csv`)));
    const other = await readGood(memorySource(readFileSync(FOLDER + file)), options(file));
    expect(inRunOrder(other.shots)).toEqual(inRunOrder(plain.shots));
  });

  it("sets one shot aside for an empty count and for NaN", async () => {
    for (const file of ["missing-count.csv", "nan-count.csv"]) {
      const { shots } = await readGood(memorySource(readFileSync(FOLDER + file)));
      expect(shots.filter(({ missing }) => missing)).toEqual([{ role: "shots", time_us: 5, shot: 11, counts: [20, 9, 11, null], missing: true }]);
    }
  });

  it("keeps fractional counts as float32", async () => {
    const { batches, shots } = await readGood(memorySource(readFileSync(`${FOLDER}fractional.csv`)));
    expect(batches.every(({ counts }) => counts instanceof Float32Array)).toBe(true);
    expect(shots[0].counts).toEqual([0.25, 1.25, 0.25, 8.25]);
  });

  it("gives the names of sites as they stand, even those a spreadsheet would run", async () => {
    const { summary } = await readGood(memorySource(readFileSync(`${FOLDER}formula.csv`)));
    expect(summary.siteNames).toEqual(["=2+5", "@a", "+b", "-c"]);
  });

  it("advises against decimal commas", async () => {
    const answer = await read("decimal-comma.csv");
    expect(isProblem(answer) && answer.detail).toContain("decimal comma");
  });

  it("reads an array of terabytes' promise without allocating it", async () => {
    const before = process.memoryUsage().arrayBuffers;
    await read("claims-terabytes.npy");
    expect(process.memoryUsage().arrayBuffers - before).toBeLessThan(4e6);
  });
});
