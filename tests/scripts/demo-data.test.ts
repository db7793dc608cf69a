import { readFileSync } from "node:fs";
import { describe, expect, it } from "vitest";
import { z } from "zod";
import { powerLawCouplings } from "@/lib/science/theory/couplings";
import { isingCorrelator } from "@/lib/science/theory/ising-quench";
import { demoFiles } from "../../scripts/demo-data/demo-runs";
import { analyseDemo, readDemoCsv, readDemoNpz } from "./analyse-demo-run";

const LARGEST_FILE = 400_000;
const DemoList = z.array(
  z.object({
    run: z.object({ notes: z.string() }),
    archives: z.array(z.object({ file: z.string() })),
    analysis: z.object({
      bootstrap: z.object({ replicates: z.literal(1000), seed: z.literal(1) }),
      traces: z.object({ kind: z.literal("reference"), site: z.literal(0) }),
    }),
  }),
);

describe("the demo files", () => {
  const files = demoFiles();

  it.each(Object.keys(files))("%s is small and made again byte for byte", (name) => {
    const shipped = readFileSync(`sample-data/${name}`);
    expect(shipped.length).toBeLessThan(LARGEST_FILE);
    expect(Buffer.compare(shipped, files[name])).toBe(0);
  });

  it("are all used by a run, each of which says that it is simulated", () => {
    const runs = DemoList.parse(JSON.parse(readFileSync("sample-data/runs.json", "utf8")));
    expect(runs.flatMap(({ archives }) => archives.map(({ file }) => file)).sort()).toEqual(Object.keys(files).sort());
    for (const { run } of runs) expect(run.notes).toMatch(/simulated/i);
  });
});

describe("the XY chain of the demo", () => {
  const run = readDemoCsv("xy-chain.csv.gz");
  const { front } = analyseDemo(run, false);

  it("holds 30 times of 1200 shots of 11 ions", () => {
    expect([run.times_us.length, run.shots, run.sites, run.counts.length]).toEqual([30, 1200, 11, 30 * 1200 * 11]);
  });

  it("has a front at every distance, that reaches the far end inside the window and is faster than linear", () => {
    expect(front.points.every(({ fitted }) => fitted)).toBe(true);
    expect(front.points[9].time_us).toBeLessThan(0.75 * run.times_us[29]);
    expect(front.verdict).toBe("faster than linear");
    expect(front.verdictSentence).toMatch(/^Faster than linear within this window: β = /);
  });
});

describe("the Ising chain of the demo", () => {
  const run = readDemoNpz("ising-chain.npz");
  const corrected = analyseDemo(run, true);
  const read = analyseDemo(run, false);

  /**
   * Mean squared distance from the exact correlators of site 0, in squared standard errors, over the samples with enough
   * flips for a bootstrap error to cover.
   */
  function misfit({ traces, fewFlips }: typeof corrected): number {
    const couplings = powerLawCouplings(10, 0.6, 2 * Math.PI * 330e-6);
    const times = run.times_us.length;
    const squares = Array.from(traces.value.keys())
      .filter((at) => fewFlips[at % times][Math.floor(at / times)] === 0)
      .map((at) => {
        const exact = isingCorrelator(couplings, 10, 0, 1 + Math.floor(at / times), run.times_us[at % times]);
        return ((traces.value[at] - exact) / traces.error[at]) ** 2;
      });
    expect(squares.length).toBeGreaterThan(traces.value.length / 2);
    return squares.reduce((sum, square) => sum + square, 0) / squares.length;
  }

  it("reads every site wrong in several percent of its calibration shots", () => {
    for (const { falseBright, falseDark } of corrected.sites) {
      expect((falseBright ?? 0) + (falseDark ?? 0)).toBeGreaterThan(0.06);
      expect((falseBright ?? 0) + (falseDark ?? 0)).toBeLessThan(0.2);
    }
  });

  it("agrees with the exact correlators once readout errors are undone, and not before", () => {
    expect(misfit(corrected)).toBeLessThan(1.3);
    expect(misfit(read)).toBeGreaterThan(2);
  });
});

describe("the straight chain of the demo", () => {
  const run = readDemoNpz("straight-chain.npz");
  const { front } = analyseDemo(run, false);

  it("is not distinguishable from linear, with room on both sides of γ = 1", () => {
    const gamma = "reason" in front.powerLaw ? null : front.powerLaw.gamma;
    expect(front.verdict).toBe("not distinguishable from linear");
    expect(gamma?.low).toBeLessThan(0.97);
    expect(gamma?.high).toBeGreaterThan(1.03);
    expect(front.points.every(({ fitted }) => fitted)).toBe(true);
  });

  // The level is 10 % of (2/π) asin ρ near its plateau, so ρ falls to about 0.14: d = 1.4 l, and l = 0.25 sites/µs × t.
  it("spreads at about 1.4 correlation lengths", () => {
    const velocity = "reason" in front.linear ? null : front.linear.v_sites_per_ms.value;
    expect(velocity).toBeGreaterThan(250 * 1.3);
    expect(velocity).toBeLessThan(250 * 1.6);
  });
});
