import { readFileSync } from "node:fs";
import fc from "fast-check";
import { describe, expect, it } from "vitest";
import type { CalibrationCounts } from "@/lib/science/detection/calibration";
import { detect, type Detected } from "@/lib/science/detection/detect";
import type { DetectionInput } from "@/lib/science/detection/detection-input";
import { countHistograms, type SiteHistogram } from "@/lib/science/detection/histogram";

const runs: Record<
  string,
  { histograms: number[][]; mixture: { threshold: number; falseBright: number; falseDark: number }[] }
> = JSON.parse(readFileSync("tests/fixtures/detection/run-histograms.json", "utf8")).runs;

const whole = (frequencies: ArrayLike<number>): SiteHistogram => ({
  firstBin: 0,
  frequencies: Uint32Array.from(frequencies),
});
const RUN = runs["xy-chain-12"];
const run = RUN.histograms.map(whole);
const zeros = whole([900]);
const dim = whole([400, 350, 160, 60, 20, 5, 1]);

const calibrationOf3: CalibrationCounts = {
  sites: 3,
  dark: Uint16Array.from(Array.from({ length: 120 }, (_, s) => [s % 3, s % 2, s === 0 ? 9 : 1]).flat()),
  bright: Uint16Array.from(Array.from({ length: 150 }, (_, s) => [6 + (s % 5), 4 + (s % 3), s < 3 ? 0 : 8]).flat()),
};

function input(part: Partial<DetectionInput>): DetectionInput {
  return { method: "mixture", model: "auto", thresholdScope: "site", thresholds: null, histograms: run, countKind: "whole", calibration: null, ...part };
}

function detected(part: Partial<DetectionInput>): Detected["sites"] {
  const result = detect(input(part));
  if (result.kind === "refused") throw new Error(result.message);
  return result.sites;
}

const codes = (site: Detected["sites"][number]) => site.warnings.map((warning) => warning.code);

describe("a detection by mixture", () => {
  it("has the advised thresholds and error rates of an outside program on a simulated run", () => {
    detected({}).forEach((site, i) => {
      const expected = RUN.mixture[i];
      expect(site.site).toBe(i);
      expect(site.threshold).toBe(expected.threshold);
      expect(Math.abs((site.falseBright ?? 0) / expected.falseBright - 1)).toBeLessThan(1e-5);
      expect(Math.abs((site.falseDark ?? 0) / expected.falseDark - 1)).toBeLessThan(1e-5);
      expect(site.fidelity).toBeCloseTo(1 - (expected.falseBright + expected.falseDark) / 2, 8);
      expect(site.ratesFrom).toBe("mixture");
      expect(codes(site)).toEqual(["leakage-unseen"]);
    });
  });

  it("keeps given thresholds and estimates the error rates there", () => {
    const sites = detected({ thresholds: run.map((_, i) => i + 0.25) });
    expect(sites.map((site) => site.threshold)).toEqual(run.map((_, i) => i + 0.25));
    expect(sites[2].falseBright).toBeGreaterThan(detected({})[2].falseBright ?? 1);
    expect(detected({ thresholds: [4.5] }).every((site) => site.threshold === 4.5)).toBe(true);
  });

  it("makes up no rates for a site with one component, and lends it the other sites' median threshold", () => {
    const sites = detected({ histograms: [run[0], zeros, run[1], dim, run[2]] });
    expect(sites.map((site) => site.threshold)).toEqual([5.5, 5.5, 3.5, 5.5, 5.5]);
    for (const site of [sites[1], sites[3]]) {
      expect(site).toMatchObject({
        falseBright: null,
        falseDark: null,
        falseBrightInterval: null,
        falseDarkInterval: null,
        fidelity: null,
        evidence: null,
        mixture: null,
        ratesFrom: null,
      });
    }
    expect(codes(sites[1])).toEqual(["all-zero", "threshold-borrowed", "rates-unknown", "always-dark"]);
    expect(codes(sites[3])).toEqual(["one-component", "threshold-borrowed", "rates-unknown"]);
  });

  it("puts the threshold above every count where no site shows two components", () => {
    const sites = detected({ histograms: [zeros, dim] });
    expect(sites.map((site) => site.threshold)).toEqual([0.5, 6.5]);
    expect(codes(sites[1])).toEqual(["one-component", "threshold-above-all", "rates-unknown", "always-dark"]);
  });

  it("calls two components inseparable that no threshold tells apart", () => {
    const poisson = (rate: number, shots: number) => {
      let term = shots * Math.exp(-rate);
      return Array.from({ length: 25 }, (_, n) => (n === 0 ? term : (term *= rate / n)));
    };
    const [low, high] = [poisson(3, 300_000), poisson(3.8, 300_000)];
    const [site] = detected({ histograms: [whole(low.map((f, n) => Math.round(f + high[n]))), run[0]] });
    expect(codes(site)).toEqual(["inseparable", "threshold-borrowed", "rates-unknown"]);
    expect(site.falseBright).toBeNull();
    expect(site.mixture).not.toBeNull();
  });

  it("warns of overlap, of a correction that will be refused, and of rare components", () => {
    const [far] = detected({ thresholds: [14.5] });
    expect(codes(far)).toEqual(["leakage-unseen", "components-overlap"]);
    const [farther] = detected({ thresholds: [30.5] });
    expect(codes(farther)).toEqual(["leakage-unseen", "components-overlap", "correction-refused"]);
    const rare = new Array<number>(30).fill(0);
    [500, 300, 90, 15].forEach((f, n) => (rare[n] = f));
    [18, 20, 22, 19].forEach((n) => (rare[n] += 2));
    expect(codes(detected({ histograms: [whole(rare)] })[0])).toContain("rare-component");
  });

  it("refuses fractional counts and says why", () => {
    expect(detect(input({ countKind: "fractional" }))).toMatchObject({
      kind: "refused",
      where: "method",
      message: expect.stringContaining("needs whole counts"),
    });
  });

  it("follows its sites under any order", () => {
    const inOrder = detected({ histograms: run.slice(0, 6) });
    fc.assert(
      fc.property(fc.shuffledSubarray([0, 1, 2, 3, 4, 5], { minLength: 1 }), (order) => {
        const sites = detected({ histograms: order.map((i) => run[i]) });
        expect(sites).toEqual(order.map((i, site) => ({ ...inOrder[i], site })));
      }),
      { numRuns: 20 },
    );
  });
});

describe("a detection by calibration", () => {
  const three = { method: "calibration", histograms: run.slice(0, 3), calibration: calibrationOf3 } as const;

  it("advises thresholds and counts errors with their shots", () => {
    const sites = detected(three);
    expect(sites.map((site) => site.threshold)).toEqual([2.5, 1.5, 1.5]);
    expect(sites[2].evidence).toEqual({ dark: { errors: 1, shots: 120 }, bright: { errors: 3, shots: 150 } });
    expect(sites[2].falseBright).toBe(1 / 120);
    expect(sites[2].falseDark).toBe(3 / 150);
    expect(sites[2].mixture).toBeNull();
    expect(sites.every((site) => site.ratesFrom === "calibration" && site.warnings.length === 0)).toBe(true);
  });

  it("keeps given thresholds", () => {
    const sites = detected({ ...three, thresholds: [7.5] });
    expect(sites.map((site) => site.threshold)).toEqual([7.5, 7.5, 7.5]);
    expect(sites[0].falseDark).toBe(60 / 150);
  });

  it("works on fractional counts", () => {
    const halves = (counts: Uint16Array | Float32Array) => Float32Array.from(counts, (n) => n / 4 - 1);
    const calibration = { sites: 3, dark: halves(calibrationOf3.dark), bright: halves(calibrationOf3.bright) };
    const sites = detected({ ...three, calibration, countKind: "fractional" });
    expect(sites.map((site) => site.falseDark)).toEqual(detected(three).map((site) => site.falseDark));
    expect(sites[0].threshold).toBe(0);
  });

  it("warns when there are few calibration shots", () => {
    const few = { sites: 3, dark: calibrationOf3.dark.slice(0, 90), bright: calibrationOf3.bright };
    expect(codes(detected({ ...three, calibration: few })[0])).toEqual(["few-calibration-shots"]);
  });

  it.each([
    ["none", null],
    ["only dark ones", { sites: 3, dark: calibrationOf3.dark, bright: new Uint16Array(0) }],
  ])("is refused with %s", (_, calibration) => {
    expect(detect(input({ ...three, calibration }))).toMatchObject({ kind: "refused", where: "method" });
  });

  it("is refused when calibration and run have different sites", () => {
    expect(detect(input({ ...three, histograms: run }))).toMatchObject({
      kind: "refused",
      message: "The calibration shots have 3 sites, the run 12.",
    });
  });
});

describe("a detection with fixed thresholds", () => {
  it("takes error rates from calibration when there is one", () => {
    const [site] = detected({
      method: "fixed",
      thresholds: [3.5],
      histograms: run.slice(0, 3),
      calibration: calibrationOf3,
    });
    expect(site).toMatchObject({ threshold: 3.5, ratesFrom: "calibration", falseBright: 0, mixture: null });
  });

  it("takes them from the mixture otherwise, and leaves them open where it fails", () => {
    const sites = detected({ method: "fixed", thresholds: [3.5], histograms: [run[0], zeros] });
    expect(sites[0].ratesFrom).toBe("mixture");
    expect(sites[1]).toMatchObject({ threshold: 3.5, ratesFrom: null, falseBright: null, fidelity: null });
    expect(codes(sites[1])).toEqual(["all-zero", "rates-unknown", "always-dark"]);
  });

  it("leaves them open for fractional counts without calibration", () => {
    const histograms = countHistograms(Float32Array.of(-0.5, 1.25, 2.75, 0.5), 2);
    const sites = detected({ method: "fixed", thresholds: [1, 4], histograms, countKind: "fractional" });
    expect(sites.map(codes)).toEqual([["rates-unknown"], ["rates-unknown", "always-dark"]]);
  });

  it("tells a site that reads bright in every shot", () => {
    const [site] = detected({ method: "fixed", thresholds: [-0.5], histograms: [run[0]] });
    expect(codes(site)).toContain("always-bright");
  });

  it.each([
    ["no threshold", null],
    ["too few thresholds", [1.5, 2.5]],
    ["a threshold that is no number", [Number.NaN]],
  ])("is refused with %s", (_, thresholds) => {
    expect(detect(input({ method: "fixed", thresholds }))).toMatchObject({ kind: "refused", where: "thresholds" });
  });
});
