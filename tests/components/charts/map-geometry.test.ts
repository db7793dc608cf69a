import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { colourLimit, distanceBranches, mapGeometry, rowOfDistance, timeBorders, type MapRow } from "@/components/charts/map-geometry";
import { divergingColour } from "@/components/charts/diverging-colours";
import { lab } from "d3";

const row = (label: string, distance: number | null, values: number[] | null = []): MapRow => ({ label, distance, values });

describe("a correlation map", () => {
  it("puts cell borders midway between times, also for uneven times", () => {
    expect(timeBorders([10, 20, 40])).toEqual([5, 15, 30, 50]);
  });

  it("never starts before time zero", () => {
    expect(timeBorders([2, 10])[0]).toBe(0);
  });

  it("covers the plot exactly with its cells", () => {
    fc.assert(
      fc.property(fc.uniqueArray(fc.integer({ min: 1, max: 10_000 }), { minLength: 2, maxLength: 40 }), fc.integer({ min: 1, max: 64 }), (times, rows) => {
        const data = { rowName: "site", times_us: times.sort((a, b) => a - b), rows: Array.from({ length: rows }, (_, r) => row(`${r}`, r)) };
        const geometry = mapGeometry(data, { width: 700, height: 400 });
        expect(geometry.columnEdges[0]).toBeCloseTo(geometry.area.left, 9);
        expect(geometry.columnEdges[times.length]).toBeCloseTo(geometry.area.right, 9);
        expect(geometry.rowEdges[rows]).toBeCloseTo(geometry.area.top, 9);
      }),
    );
  });

  it("has a colour limit that no value exceeds", () => {
    fc.assert(
      fc.property(fc.array(fc.double({ min: -1, max: 1, noNaN: true }), { minLength: 1 }), (values) => {
        const limit = colourLimit([row("a", 1, values)]);
        expect(Math.max(...values.map(Math.abs))).toBeLessThanOrEqual(limit * (1 + 1e-12));
      }),
    );
  });

  it("lays a front on both sides of a reference site in the middle", () => {
    const rows = [row("0", 2), row("1", 1), row("2", null, null), row("3", 1), row("4", 2)];
    const [upper, lower] = distanceBranches(rows);
    expect(rowOfDistance(upper, 1.5)).toBe(3.5);
    expect(rowOfDistance(lower, 1.5)).toBe(0.5);
    expect(rowOfDistance(upper, 3)).toBeNull();
  });

  it("lays no front over rows whose distance does not grow, as in a plane", () => {
    expect(distanceBranches([row("0", 1), row("1", 2), row("2", 1)])).toEqual([]);
  });
});

describe("the colours of a map", () => {
  it.each(["paper", "night", "white"] as const)("are as light for −x as for +x and steady in lightness (%s)", (theme) => {
    const lightness = (x: number) => lab(divergingColour(theme, x, 1) ?? "none").l;
    for (let x = 0.05; x <= 1; x += 0.05) {
      expect(Math.abs(lightness(x) - lightness(-x))).toBeLessThan(1.5);
      const away = theme !== "night" ? lightness(x - 0.05) - lightness(x) : lightness(x) - lightness(x - 0.05);
      expect(away).toBeGreaterThan(0.5);
    }
  });

  it("leave the ground where there is no number", () => {
    expect(divergingColour("paper", null, 1)).toBeNull();
    expect(divergingColour("paper", Number.NaN, 1)).toBeNull();
  });
});
