import { gzipSync } from "node:zlib";
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { csvNumber, csvText } from "@/lib/formats/csv-cell";
import { memorySource } from "@/lib/formats/memory-source";
import { writeNpy } from "@/lib/formats/write-npy";
import { writeNpz } from "@/lib/formats/write-npz";
import { inRunOrder, readGood, type PlainShot } from "./read-all";

/** A random run: sorted times, the same number of shots at each, whole counts. */
const run = fc
  .record({ times: fc.uniqueArray(fc.integer({ min: 0, max: 99_999 }), { minLength: 1, maxLength: 4 }), shots: fc.integer({ min: 1, max: 5 }), sites: fc.integer({ min: 1, max: 6 }) })
  .chain(({ times, shots, sites }) =>
    fc.record({
      times_us: fc.constant(times.map((time) => time / 8).sort((a, b) => a - b)),
      shots: fc.constant(shots),
      sites: fc.constant(sites),
      counts: fc.array(fc.integer({ min: 0, max: 65_535 }), { minLength: times.length * shots * sites, maxLength: times.length * shots * sites }),
    }),
  );
type Run = typeof run extends fc.Arbitrary<infer R> ? R : never;

const dress = fc.record({
  separator: fc.constantFrom(",", ";", "\t"),
  newline: fc.constantFrom("\n", "\r\n"),
  mark: fc.boolean(),
  lastNewline: fc.boolean(),
  quoted: fc.boolean(),
  packed: fc.boolean(),
  chunkBytes: fc.integer({ min: 1, max: 64 }),
});
type Dress = typeof dress extends fc.Arbitrary<infer D> ? D : never;

function shotsOf({ times_us, shots, sites, counts }: Run): PlainShot[] {
  return times_us.flatMap((time_us, k) =>
    Array.from({ length: shots }, (_, shot) => {
      const first = (k * shots + shot) * sites;
      return { role: "shots" as const, time_us, shot, counts: counts.slice(first, first + sites), missing: false };
    }),
  );
}

function dressed(table: string[][], { separator, newline, mark, lastNewline, quoted, packed, chunkBytes }: Dress): ReturnType<typeof memorySource> {
  const rows = table.map((cells) => cells.map((cell) => (quoted && !cell.startsWith('"') ? `"${cell}"` : cell)).join(separator));
  const bytes = Buffer.from((mark ? "\ufeff" : "") + rows.join(newline) + (lastNewline ? newline : ""));
  return memorySource(packed ? gzipSync(bytes) : bytes, chunkBytes);
}

describe("what is written is read back", () => {
  it("as a table with one row a shot, in any dress and with any chunk borders", async () => {
    await fc.assert(
      fc.asyncProperty(run, dress, async (made, clothes) => {
        const header = ["time_us", "shot", ...Array.from({ length: made.sites }, (_, i) => csvText(`s,${i}`))];
        const rows = shotsOf(made).map(({ time_us, shot, counts }) => [time_us, shot, ...counts].map(csvNumber));
        expect((await readGood(dressed([header, ...rows], clothes))).shots).toEqual(shotsOf(made));
      }),
      { numRuns: 150 },
    );
  });

  it("as a table with one row a count, in any order of rows", async () => {
    await fc.assert(
      fc.asyncProperty(run, dress, fc.infiniteStream(fc.double({ min: 0, max: 1, noNaN: true })), async (made, clothes, order) => {
        const rows = shotsOf(made).flatMap(({ time_us, shot, counts }) => counts.map((count, site) => [time_us, shot, site, count].map(csvNumber)));
        const mixed = rows.map((row) => ({ row, key: order.next().value })).sort((a, b) => a.key - b.key).map(({ row }) => row);
        const { shots } = await readGood(dressed([["time_us", "shot", "site", "count"], ...mixed], clothes));
        expect(inRunOrder(shots)).toEqual(shotsOf(made));
      }),
      { numRuns: 150 },
    );
  });

  it("as arrays, alone and in an archive, plain and gzipped", async () => {
    await fc.assert(
      fc.asyncProperty(run, fc.boolean(), fc.integer({ min: 1, max: 64 }), async (made, packed, chunkBytes) => {
        const counts = { shape: [made.times_us.length, made.shots, made.sites], values: Int32Array.from(made.counts) };
        const times_us = { shape: [made.times_us.length], values: Float64Array.from(made.times_us) };
        const source = (bytes: Uint8Array): ReturnType<typeof memorySource> => memorySource(packed ? gzipSync(bytes) : bytes, chunkBytes);
        expect((await readGood(source(writeNpy(counts)), { times_us: made.times_us })).shots).toEqual(shotsOf(made));
        expect((await readGood(source(writeNpz({ counts, times_us })))).shots).toEqual(shotsOf(made));
      }),
      { numRuns: 60 },
    );
  });

  it("writes the same archive bytes every time", () => {
    const array = { shape: [3], values: Float32Array.of(1, 2, 3) };
    expect(writeNpz({ array })).toEqual(writeNpz({ array }));
    expect(() => writeNpy({ shape: [4], values: array.values })).toThrow("Shape");
  });
});
