import { readFileSync } from "node:fs";
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { createRandomStream, isSeed, multiplyHigh, philoxBlock, seedKey } from "@/lib/science/stats/philox";

interface Vectors {
  philox: { counter: string[]; key: string[]; out: string[] }[];
  multiply_high: [string, string, string][];
  uniform_zero_block: [number, number];
}

const checks: Vectors = JSON.parse(readFileSync("tests/fixtures/checks/statistics.json", "utf8"));
const word = (text: string) => Number.parseInt(text, 16);
const hex = (value: number) => value.toString(16).padStart(8, "0");
const uint32 = fc.integer({ min: 0, max: 0xffffffff });

describe("Philox4x32-10", () => {
  it.each(checks.philox)(
    "gives the published block for counter $counter and key $key (Random123 kat_vectors)",
    ({ counter, key, out }) => {
      const [c0, c1, c2, c3] = counter.map(word);
      const [k0, k1] = key.map(word);
      const block = new Uint32Array(4);
      philoxBlock(c0, c1, c2, c3, k0, k1, block, 0);
      expect([...block].map(hex)).toEqual(out);
    },
  );

  it("writes four words at the offset and nothing else", () => {
    const out = new Uint32Array(8).fill(7);
    philoxBlock(0, 0, 0, 0, 0, 0, out, 2);
    expect([...out].map(hex)).toEqual([
      "00000007",
      "00000007",
      "6627e8d5",
      "e169c58d",
      "bc57ac4c",
      "9b00dbd8",
      "00000007",
      "00000007",
    ]);
  });

  it.each(checks.multiply_high)("multiplies %s by %s to the high word %s, where rounding goes astray", (a, b, high) => {
    expect(hex(multiplyHigh(word(a), word(b)))).toBe(high);
    expect(hex(Math.floor((word(a) * word(b)) / 2 ** 32))).not.toBe(high);
  });

  it("agrees with big integers on the high word of any product", () => {
    fc.assert(
      fc.property(uint32, uint32, (a, b) => multiplyHigh(a, b) === Number((BigInt(a) * BigInt(b)) >> 32n)),
      { numRuns: 20_000 },
    );
  });
});

describe("a random stream", () => {
  it("makes 53-bit uniforms from two words, the first giving the high bits", () => {
    const stream = createRandomStream(0, 0, 0, 0);
    expect([stream.nextUniform(), stream.nextUniform()]).toEqual(checks.uniform_zero_block);
  });

  it("draws block after block with the counter (draw, replicate, index, purpose) and the seed's words as key", () => {
    fc.assert(
      fc.property(fc.maxSafeNat(), uint32, uint32, uint32, (seed, purpose, index, replicate) => {
        const stream = createRandomStream(seed, purpose, index, replicate);
        const { key0, key1 } = seedKey(seed);
        const block = new Uint32Array(8);
        philoxBlock(0, replicate, index, purpose, key0, key1, block, 0);
        philoxBlock(1, replicate, index, purpose, key0, key1, block, 4);
        expect(Array.from({ length: 8 }, () => stream.nextUint32())).toEqual([...block]);
      }),
    );
  });

  it("keeps all 53 bits of a seed", () => {
    const largest = Number.MAX_SAFE_INTEGER;
    expect(seedKey(largest)).toEqual({ key0: 0xffffffff, key1: 0x1fffff });
    expect(createRandomStream(largest, 1, 0).nextUint32()).not.toBe(createRandomStream(0xffffffff, 1, 0).nextUint32());
  });

  it.each([-1, 0.5, 2 ** 53, Number.NaN, Number.POSITIVE_INFINITY])("refuses %s as a seed", (seed) => {
    expect(isSeed(seed)).toBe(false);
    expect(() => createRandomStream(seed, 1, 0)).toThrow(RangeError);
  });

  it("gives uniforms in [0, 1) whose mean and variance are those of the uniform law", () => {
    const stream = createRandomStream(11, 1, 0);
    const n = 200_000;
    let sum = 0;
    let squares = 0;
    let outside = 0;
    for (let s = 0; s < n; s++) {
      const u = stream.nextUniform();
      if (u < 0 || u >= 1) outside += 1;
      sum += u;
      squares += (u - 0.5) ** 2;
    }
    expect(outside).toBe(0);
    // Five standard errors: 1/sqrt(12 n) for the mean, 1/sqrt(180 n) for the variance.
    expect(Math.abs(sum / n - 0.5)).toBeLessThan(5 / Math.sqrt(12 * n));
    expect(Math.abs(squares / n - 1 / 12)).toBeLessThan(5 / Math.sqrt(180 * n));
  });
});
