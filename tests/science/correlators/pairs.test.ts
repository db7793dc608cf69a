import { describe, expect, it } from "vitest";
import { listPairs, pairCount, pairIndex } from "@/lib/science/correlators/pairs";

describe("the pair list", () => {
  it("is lexicographic", () => {
    expect([...listPairs(4)]).toEqual([0, 1, 0, 2, 0, 3, 1, 2, 1, 3, 2, 3]);
  });

  it.each([1, 2, 7, 64])("of %i sites is found back by its index, sites in either order", (sites) => {
    const pairs = listPairs(sites);
    expect(pairs.length).toBe(2 * pairCount(sites));
    for (let p = 0; p < pairs.length / 2; p++) {
      expect(pairIndex(sites, pairs[2 * p], pairs[2 * p + 1])).toBe(p);
      expect(pairIndex(sites, pairs[2 * p + 1], pairs[2 * p])).toBe(p);
    }
  });
});
