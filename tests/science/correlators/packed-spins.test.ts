import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { countBits, packSpins } from "@/lib/science/correlators/packed-spins";

function spinOf(words: Uint32Array, stride: number, i: number, s: number): number {
  return (words[i * stride + (s >>> 5)] >>> (s & 31)) & 1;
}

describe("packed spins", () => {
  it("are up strictly above the threshold", () => {
    const { words } = packSpins(Uint16Array.of(3, 4, 5), 3, 1, Float64Array.of(4), "up");
    expect([...words]).toEqual([0b100]);
  });

  it("are down where bright when bright is down, with no bit beyond the last shot", () => {
    const { words } = packSpins(Uint16Array.of(3, 4, 5), 3, 1, Float64Array.of(3.5), "down");
    expect([...words]).toEqual([0b001]);
  });

  it("compare fractional counts in float32, where 0.1 is not above 0.1", () => {
    const { words } = packSpins(Float32Array.of(0.1, 0.1000001, -2), 3, 1, Float64Array.of(0.1), "up");
    expect([...words]).toEqual([0b010]);
  });

  it("hold every shot of every site in its place", () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 5 }), fc.integer({ min: 0, max: 100 }), fc.nat(), (sites, shots, salt) => {
        const counts = Uint16Array.from({ length: shots * sites }, (_, n) => (n * 7919 + salt) % 11);
        const { words } = packSpins(counts, shots, sites, new Float64Array(sites).fill(4.5), "up");
        const stride = Math.ceil(shots / 32);
        expect(words.length).toBe(sites * stride);
        for (let s = 0; s < shots; s++) {
          for (let i = 0; i < sites; i++) expect(spinOf(words, stride, i, s)).toBe(counts[s * sites + i] > 4.5 ? 1 : 0);
        }
      }),
    );
  });

  it("refuse arrays that contradict the shape", () => {
    expect(() => packSpins(new Uint16Array(5), 2, 3, new Float64Array(3), "up")).toThrow(RangeError);
    expect(() => packSpins(new Uint16Array(6), 2, 3, new Float64Array(2), "up")).toThrow(RangeError);
  });

  it("count their bits", () => {
    fc.assert(
      fc.property(fc.integer(), (word) => {
        const ones = (word >>> 0).toString(2).replaceAll("0", "").length;
        expect(countBits(word)).toBe(ones);
      }),
    );
  });
});
