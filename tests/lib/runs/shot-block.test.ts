import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { countTypeOf, joinBlocks, packBlock, sortBlock, unpackBlock, type ShotBlock } from "@/lib/runs/shot-block";

const block = fc.record({ sites: fc.integer({ min: 1, max: 6 }), shots: fc.integer({ min: 1, max: 30 }), fractional: fc.boolean(), seed: fc.nat() }).map(({ sites, shots, fractional, seed }): ShotBlock => {
  const counts = fractional ? new Float32Array(shots * sites) : new Uint16Array(shots * sites);
  counts.forEach((_, at) => (counts[at] = ((seed + 1) * (at + 3) * 7919) % 65_536));
  return { shots, sites, shotNumbers: Float64Array.from({ length: shots }, (_, s) => (seed + s * 31) % 97), counts };
});

describe("a block of shots", () => {
  it("comes back from its bytes as it was", async () => {
    await fc.assert(
      fc.asyncProperty(block, async (shots) => {
        expect(await unpackBlock(await packBlock(shots), shots.shots, countTypeOf(shots.counts))).toEqual(shots);
      }),
    );
  });

  it("packs only its own part of a larger buffer", async () => {
    const counts = Uint16Array.of(9, 9, 1, 2, 3, 4).subarray(2);
    const part: ShotBlock = { shots: 2, sites: 2, shotNumbers: Float64Array.of(7, 0, 1).subarray(1), counts };
    const back = await unpackBlock(await packBlock(part), 2, "uint16");
    expect(Array.from(back.counts)).toEqual([1, 2, 3, 4]);
    expect(Array.from(back.shotNumbers)).toEqual([0, 1]);
  });

  it("sorted has rising shot numbers, each with its own counts, equal numbers in their old order", () => {
    fc.assert(
      fc.property(block, (shots) => {
        const sorted = sortBlock(shots);
        const rows = ({ shotNumbers, counts, sites }: ShotBlock) => Array.from(shotNumbers, (number, s) => ({ number, counts: Array.from(counts.subarray(s * sites, (s + 1) * sites)) }));
        const expected = rows(shots).sort((first, second) => first.number - second.number);
        expect(rows(sorted)).toEqual(expected);
      }),
    );
  });

  it("joined with one of fractions becomes fractional, and keeps every value", () => {
    const whole: ShotBlock = { shots: 1, sites: 2, shotNumbers: Float64Array.of(0), counts: Uint16Array.of(3, 65_535) };
    const fractional: ShotBlock = { shots: 1, sites: 2, shotNumbers: Float64Array.of(1), counts: Float32Array.of(0.5, -1.25) };
    const joined = joinBlocks([whole, fractional], 2);
    expect(joined.counts).toEqual(Float32Array.of(3, 65_535, 0.5, -1.25));
    expect(joined.shots).toBe(2);
  });
});
