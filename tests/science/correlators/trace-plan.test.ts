import { describe, expect, it } from "vitest";
import { listPairs } from "@/lib/science/correlators/pairs";
import {
  planDistanceTraces,
  planReferenceTraces,
  type SitePositions,
  type TracePlan,
} from "@/lib/science/correlators/trace-plan";

function chain(x: number[]): SitePositions {
  return { x: Float64Array.from(x), y: null };
}

function square(side: number): SitePositions {
  const sites = Array.from({ length: side * side }, (_, i) => i);
  return { x: Float64Array.from(sites, (i) => i % side), y: Float64Array.from(sites, (i) => Math.floor(i / side)) };
}

function pairsOf(plan: TracePlan, sites: number): string[][] {
  const pairs = listPairs(sites);
  return plan.labels.map((_, q) =>
    [...plan.pairs.subarray(plan.offsets[q], plan.offsets[q + 1])].map((p) => `${pairs[2 * p]}-${pairs[2 * p + 1]}`),
  );
}

describe("reference-site traces", () => {
  it("are one for each other site, in site order", () => {
    const plan = planReferenceTraces(chain([0, 1, 2.5, 4]), 2);
    expect(plan.labels).toEqual(["site 0", "site 1", "site 3"]);
    expect([...plan.distances]).toEqual([2.5, 1.5, 1.5]);
    expect(pairsOf(plan, 4)).toEqual([["0-2"], ["1-2"], ["2-3"]]);
  });

  it("refuse a reference that is no site", () => {
    expect(() => planReferenceTraces(chain([0, 1]), 2)).toThrow(RangeError);
  });
});

describe("distance-averaged traces", () => {
  it("hold all pairs of a regular chain at each distance", () => {
    const plan = planDistanceTraces(chain([0, 1, 2, 3]));
    expect([...plan.distances]).toEqual([1, 2, 3]);
    expect(pairsOf(plan, 4)).toEqual([["0-1", "1-2", "2-3"], ["0-2", "1-3"], ["0-3"]]);
  });

  it("keep distances that differ by less than a millionth together, and lattice distances apart", () => {
    const wobble = planDistanceTraces(chain([0, 1 + 4e-7, 2]));
    expect(wobble.distances.length).toBe(2);
    const plan = planDistanceTraces(square(3));
    expect(plan.labels).toEqual(["d = 1", "d = 1.41", "d = 2", "d = 2.24", "d = 2.83"]);
    expect([...plan.offsets]).toEqual([0, 12, 20, 26, 34, 36]);
  });

  it("take only pairs inside the bulk, listed once", () => {
    const plan = planDistanceTraces(chain([0, 1, 2, 3, 4]), [3, 1, 2, 2]);
    expect(pairsOf(plan, 5)).toEqual([["1-2", "2-3"], ["1-3"]]);
    expect(() => planDistanceTraces(chain([0, 1]), [7])).toThrow(RangeError);
  });

  it("bin irregular positions by the nearest whole spacing, each at its mean distance", () => {
    const plan = planDistanceTraces(chain([0, 0.9, 2, 3.2]));
    expect(pairsOf(plan, 4)).toEqual([["0-1", "1-2", "2-3"], ["0-2", "1-3"], ["0-3"]]);
    expect(plan.distances[0]).toBeCloseTo((0.9 + 1.1 + 1.2) / 3, 14);
    expect(plan.distances[1]).toBeCloseTo((2 + 2.3) / 2, 14);
    expect(plan.distances[2]).toBeCloseTo(3.2, 14);
  });
});
