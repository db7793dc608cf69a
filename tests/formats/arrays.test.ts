import { mkdtempSync, readdirSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { gzipSync } from "node:zlib";
import { zipSync } from "fflate";
import { describe, expect, it, vi } from "vitest";
import { memorySource } from "@/lib/formats/memory-source";
import { readShots } from "@/lib/formats/read-shots";
import { isProblem } from "@/lib/problem";
import { writeNpz } from "@/lib/formats/write-npz";
import { npyBytes, type HandMadeArray } from "./array-bytes";
import { readAll, readGood, refusals } from "./read-all";

const VALUES = [0, 1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11];
const GRID = { descr: "<u2", shape: [2, 3, 2], values: VALUES };
const times_us = [5, 10];

function lone(array: HandMadeArray): ReturnType<typeof memorySource> {
  return memorySource(npyBytes(array), 7);
}

describe("arrays of counts", () => {
  it.each(["|u1", "|i1", "<u2", ">u2", "<i2", ">i4", "<u4", "<i8", ">u8", "<f4", ">f8"])("reads dtype %s in both orders and all header versions", async (descr) => {
    for (const fortranOrder of [false, true]) {
      for (const version of [1, 2, 3] as const) {
        const { shots, batches } = await readGood(lone({ ...GRID, descr, fortranOrder, version }), { times_us });
        const ordered = [...shots].sort((a, b) => a.time_us - b.time_us || a.shot - b.shot);
        expect(ordered.flatMap(({ counts }) => counts)).toEqual(VALUES);
        expect(ordered.map(({ time_us, shot }) => [time_us, shot])).toEqual([[5, 0], [5, 1], [5, 2], [10, 0], [10, 1], [10, 2]]);
        expect(batches.every(({ counts }) => counts instanceof Uint16Array)).toBe(true);
      }
    }
  });

  it("reads booleans and half floats (bit patterns of IEEE 754 binary16)", async () => {
    const bits = await readGood(lone({ descr: "?", shape: [1, 2, 2], values: [0, 1, 1, 0] }), { times_us: [5] });
    expect(bits.shots.flatMap(({ counts }) => counts)).toEqual([0, 1, 1, 0]);
    const halves = await readGood(lone({ descr: "<f2", shape: [1, 1, 4], values: [0x3c00, 0xc100, 0x7e00, 0x0001] }), { times_us: [5] });
    expect(halves.shots[0].counts).toEqual([1, -2.5, null, Math.fround(2 ** -24)]);
  });

  it("refuses negative and too large whole counts by index, and lets a later fraction allow them", async () => {
    expect(await refusals(lone({ descr: "<i4", shape: [2, 1, 2], values: [0, 1, 2, -3] }), { times_us })).toEqual(["counts[1][0][1]"]);
    expect(await refusals(lone({ descr: "<i4", shape: [2, 1, 2], values: [0, 65_536, 2, 3] }), { times_us })).toEqual(["counts[0][0][1]"]);
    const { shots } = await readGood(lone({ descr: "<f8", shape: [2, 1, 2], values: [0, -1, 2, 3.5] }), { times_us });
    expect(shots.map(({ counts }) => counts)).toEqual([[0, -1], [2, 3.5]]);
  });

  it("refuses infinite counts", async () => {
    expect(await refusals(lone({ descr: "<f8", shape: [1, 1, 2], values: [0, Infinity] }), { times_us: [5] })).toEqual(["counts[0][0][1]"]);
  });

  it("asks for times where there are none, and for as many as the array has", async () => {
    const answer = await readAll(lone(GRID));
    expect(isProblem(answer) && answer.errors[0]).toMatchObject({ where: "times_us", message: expect.stringContaining("times_us=a,b,c") });
    expect(await refusals(lone(GRID), { times_us: [5] })).toEqual(["times_us"]);
    expect(await refusals(lone(GRID), { times_us: [10, 5] })).toEqual(["times_us"]);
    expect(await refusals(lone(GRID), { times_us: [-1, 5] })).toEqual(["times_us"]);
  });

  it("reads calibration shots as (K, N) and (1, K, N), without times", async () => {
    for (const shape of [[6, 2], [1, 6, 2]]) {
      const { shots } = await readGood(lone({ ...GRID, shape }), { role: "calibration-dark" });
      expect(shots).toHaveLength(6);
      expect(shots.every(({ role, time_us }) => role === "calibration-dark" && Number.isNaN(time_us))).toBe(true);
    }
    expect(await refusals(lone(GRID), { role: "calibration-dark" })).toEqual(["shape"]);
  });

  it.each([["|O", "dtype"], ["<c8", "dtype"], ["<U4", "dtype"], ["|u2", "dtype"]])("refuses dtype %s", async (descr, where) => {
    expect(await refusals(memorySource(Buffer.from(header(`'${descr}'`, "(1, 1, 1)"), "latin1")), { times_us: [5] })).toEqual([where]);
  });

  it.each([["[('a', '<u2')]", "(1, 1, 1)", "dtype"], ["'<u2'", "(1, -1)", "header"], ["'<u2'", "(9, 9, 9999999)", "shape"], ["'<u2'", "(1, 1, 900)", "file"],
    ["'<u2'", "()", "shape"]])("refuses descr %s with shape %s at %s", async (descr, shape, where) => {
    const bytes = Buffer.concat([Buffer.from(header(descr, shape), "latin1"), Buffer.alloc(2)]);
    expect(await refusals(memorySource(bytes), { times_us: [5] })).toEqual([where]);
  });
});

describe("archives of arrays", () => {
  const counts = { shape: [2, 3, 2], values: Uint16Array.from(VALUES) };
  const times = { shape: [2], values: Float64Array.from(times_us) };

  it("reads one list of shots, each with its own time, in any order", async () => {
    const arrays = { counts: { shape: [4, 3], values: Uint16Array.from(VALUES) }, times_us: { shape: [4], values: Float64Array.of(10, 5, 10, 5) } };
    const { shots } = await readGood(memorySource(writeNpz(arrays)));
    expect(shots.map(({ time_us, shot }) => [time_us, shot])).toEqual([[10, 0], [5, 0], [10, 1], [5, 1]]);
  });

  it("takes positions along a line and in a plane, and refuses those of other sites", async () => {
    const line = await readGood(memorySource(writeNpz({ counts, times_us: times, positions: { shape: [2], values: Float64Array.of(0, 1.5) } })));
    expect(line.summary.positions).toEqual([[0], [1.5]]);
    const plane = await readGood(memorySource(writeNpz({ counts, times_us: times, positions: { shape: [2, 2], values: Float64Array.of(0, 1, 2, 3) } })));
    expect(plane.summary.positions).toEqual([[0, 1], [2, 3]]);
    expect(await refusals(memorySource(writeNpz({ counts, times_us: times, positions: { shape: [3], values: new Float64Array(3) } })))).toEqual(["positions"]);
  });

  it("reads a member in Fortran order", async () => {
    const packed = zipSync({ "counts.npy": npyBytes({ ...GRID, fortranOrder: true }), "times_us.npy": npyBytes({ descr: "<f8", shape: [2], values: times_us }) });
    const { shots } = await readGood(memorySource(packed));
    const plain = await readGood(memorySource(writeNpz({ counts, times_us: times })));
    expect([...shots].sort((a, b) => a.time_us - b.time_us || a.shot - b.shot)).toEqual(plain.shots);
  });

  it("refuses calibration shots of other sites, and archives that declare too much", async () => {
    const calibration_dark = { shape: [4, 3], values: Uint16Array.from(VALUES) };
    expect(await refusals(memorySource(writeNpz({ counts, times_us: times, calibration_dark })))).toEqual(["calibration_dark"]);
    const answer = await readAll(memorySource(writeNpz({ counts, times_us: times })), { maxExpandedBytes: 100 });
    expect(isProblem(answer) && answer.code).toBe("too-large");
  });

  it("notices a flipped bit inside a stored member", async () => {
    const bytes = zipSync({ "counts.npy": [npyBytes(GRID), { level: 0 }], "times_us.npy": [npyBytes({ descr: "<f8", shape: [2], values: times_us }), { level: 0 }] });
    bytes[Buffer.from(bytes).indexOf("NUMPY") + 100] ^= 1;
    expect((await refusals(memorySource(bytes))).length).toBe(1);
  });

  it("leaves no temporary file behind, read to the end, refused or given up half-way", async () => {
    const packed = gzipSync(writeNpz({ counts, times_us: times }));
    const folder = mkdtempSync(join(tmpdir(), "formats-test-"));
    vi.stubEnv("TMPDIR", folder);
    try {
      await readGood(memorySource(packed));
      await refusals(memorySource(gzipSync(writeNpz({ counts }))));
      await refusals(memorySource(packed), { maxExpandedBytes: 50 });
      await refusals(memorySource(packed.subarray(0, 120)));
      const reading = readShots(memorySource(packed), { filename: "run.npz", role: "shots", times_us: null, maxExpandedBytes: 1e6 });
      expect((await reading.next()).done).toBe(false);
      expect(readdirSync(folder)).toHaveLength(1);
      await reading.return({ format: "npz", siteNames: [], positions: null });
      expect(readdirSync(folder)).toEqual([]);
    } finally {
      vi.unstubAllEnvs();
      rmSync(folder, { recursive: true });
    }
  });
});

function header(descr: string, shape: string): string {
  const dict = `{'descr': ${descr}, 'fortran_order': False, 'shape': ${shape}, }\n`;
  return `\x93NUMPY\x01\x00${String.fromCharCode(dict.length & 255, dict.length >> 8)}${dict}`;
}
