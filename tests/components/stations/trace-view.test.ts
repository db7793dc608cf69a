import { describe, expect, it } from "vitest";
import { siteText } from "@/components/charts/site-text";
import { traceMap, traceName, type TracesAnswer } from "@/components/stations/trace-view";

const traces: TracesAnswer = {
  kind: "reference",
  referenceSite: 1,
  labels: ["site 0", "site 2"],
  distances: [1, 1],
  times_us: [5, 10],
  value: [[0.1, 0.2], [0.3, null]],
  error: [[0.01, 0.02], [0.03, null]],
  low: [[0, 0], [0, null]],
  high: [[1, 1], [1, null]],
  bandLow: [[-1, -1], [-1, null]],
  bandHigh: [[2, 2], [2, null]],
  significant: [[false, true], [true, false]],
};

describe("the map of reference-site traces", () => {
  it("has a row for every site in order, the reference's own without values", () => {
    const { data, traceOfRow, errors } = traceMap(traces, ["a", "b", "c"]);
    expect(data.rows.map(({ label, distance }) => [label, distance])).toEqual([["a", 1], ["b", null], ["c", 1]]);
    expect(data.rows.map(({ values }) => values)).toEqual([[0.1, 0.2], null, [0.3, null]]);
    expect(traceOfRow).toEqual([0, null, 1]);
    expect(traceMap(traces, ["a", "b", "c"]).significant).toEqual([[false, true], null, [true, false]]);
    expect(traceMap({ ...traces, significant: null }, ["a", "b", "c"]).significant).toBeNull();
    expect(errors[1]).toBeNull();
  });

  it("calls traces by their site's own name", () => {
    expect([0, 1].map((trace) => traceName(traces, trace, ["a", "b", "c"]))).toEqual(["site a", "site c"]);
  });
});

describe("the map of distance-averaged traces", () => {
  it("has a row for every distance", () => {
    const { data, traceOfRow } = traceMap({ ...traces, kind: "distance", referenceSite: null, distances: [1, 1.414213] }, ["a", "b", "c"]);
    expect(data.rowName).toBe("distance");
    expect(data.rows.map(({ label }) => label)).toEqual(["1", "1.41"]);
    expect(traceOfRow).toEqual([0, 1]);
  });
});

describe("a site in a sentence", () => {
  it("is not called a site twice", () => {
    expect(["site_3", "ion_3"].map(siteText)).toEqual(["site_3", "site ion_3"]);
  });
});
