import { readFileSync } from "node:fs";
import { beforeAll, describe, expect, it } from "vitest";
import { callJson, type Credentials } from "./client";
import { makeGroup, makeSignedIn } from "./factories";
import { analyse, fixture, makeDetection, makeRun, uploadAndRead } from "./product";

/**
 * Simulated runs with known truth, through the HTTP API. Source of the expected numbers: tests/fixtures/runs/<run>/expected.json,
 * made by an independent NumPy implementation of the definitions; tolerances are the ones stated there.
 */
interface Expected {
  parameters: { thresholds: number[]; reference: number; level: number; minSignal: number; readoutCorrection: boolean; replicates: number };
  deterministic: {
    sites: number;
    times_us: number[];
    shotsPerTime: number[];
    setAside: number;
    mean: number[][];
    correlators_at: Record<string, number[][]>;
    traces: number[][];
    distances: number[];
    crossing_isotonic_us: number[];
    crossing_first_us: number[];
  };
  statistical: {
    B: number;
    traceError: number[][];
    crossing_us: (number | null)[];
    crossingError_us: number[];
    linear: Record<string, number>;
    powerLaw: Record<string, number>;
    gammaBootstrapError: number;
    verdict: string;
  };
  mixture: { sites: { dark: number; bright: number; brightWeight: number; threshold: number; falseBright: number; falseDark: number }[] };
  calibration?: { threshold: number; falseBright: number[]; falseDark: number[] };
}

interface FigureBody {
  value: number;
  error: number;
}

interface FrontBody {
  points: { time_us: number | null; error_us: number | null; status: string }[];
  linear: { t0_us: FigureBody; v_sites_per_ms: FigureBody };
  powerLaw: { gamma: FigureBody; beta: FigureBody; a: FigureBody };
  verdict: string;
}

interface TracesBody {
  distances: number[];
  times_us: number[];
  value: number[][];
  error: number[][];
}

const OUR_REPLICATES = 1000;
const RELATIVE = 1e-9;
/** Of numbers that are differences of averages of ±1: rounding, not relative to a result near zero. */
const ROUNDING = 1e-13;

const FORMS = [
  ["xy-chain-12", "shots.csv.gz"],
  ["xy-chain-12", "shots.npz"],
  ["ising-chain-10", "shots.csv.gz"],
  ["ising-chain-10", "shots.npz"],
  ["ragged-drift-8", "shots.csv.gz"],
  ["ragged-drift-8", "shots-long.csv.gz"],
  ["planar-5x5", "shots.npz"],
  ["straight-front-24", "shots.npz"],
] as const;

let analyst: Credentials;

beforeAll(async () => {
  analyst = (await makeSignedIn(await makeGroup(), "analyst")).credentials;
});

function near(found: number | null, expected: number): void {
  expect(found).not.toBeNull();
  expect(Math.abs((found ?? Number.NaN) - expected)).toBeLessThanOrEqual(RELATIVE * Math.abs(expected) + ROUNDING);
}

function nearRows(found: (number | null)[][], expected: number[][]): void {
  expect(found).toHaveLength(expected.length);
  expected.forEach((row, r) => row.forEach((value, c) => near(found[r][c], value)));
}

describe.each(FORMS)("%s as %s", (run, file) => {
  const expected = JSON.parse(readFileSync(`tests/fixtures/runs/${run}/expected.json`, "utf8")) as Expected;
  const { parameters, deterministic, statistical } = expected;
  let runId: string;
  let analysisId: string;
  let detectionId: string;

  beforeAll(async () => {
    runId = await makeRun(analyst, { title: `${run} ${file}` });
    expect((await uploadAndRead(analyst, runId, file, fixture(`runs/${run}/${file}`))).state).toBe("done");
    if (run === "ising-chain-10" && file.endsWith(".csv.gz")) {
      for (const prepared of ["dark", "bright"]) {
        const job = await uploadAndRead(analyst, runId, `calibration-${prepared}.csv.gz`, fixture(`runs/${run}/calibration-${prepared}.csv.gz`), { role: `calibration-${prepared}` });
        expect(job.state).toBe("done");
      }
    }
    const method = expected.calibration ? "calibration" : "fixed";
    detectionId = (await makeDetection(analyst, runId, { method, thresholds: parameters.thresholds })).id;
    analysisId = await analyse(analyst, runId, settings("isotonic"));
  });

  function settings(method: "isotonic" | "first") {
    return {
      detectionId,
      readoutCorrection: parameters.readoutCorrection,
      bootstrap: { replicates: OUR_REPLICATES, seed: 7 },
      traces: { kind: "reference", site: parameters.reference },
      front: { level: parameters.level, minSignal: parameters.minSignal, method },
    };
  }

  it("has the times, sites and kept shots", async () => {
    const body = await callJson<{ sites: number; times_us: number[]; shotsPerTime: number[]; shotsSetAside: Record<string, number> }>("GET", `/api/v1/runs/${runId}`, { as: analyst });
    expect(body.sites).toBe(deterministic.sites);
    expect(body.times_us).toEqual(deterministic.times_us);
    expect(body.shotsPerTime).toEqual(deterministic.shotsPerTime);
    expect(body.shotsSetAside.missing ?? 0).toBe(deterministic.setAside);
  });

  it("has the means and correlators to 1e-9", async () => {
    const body = await callJson<{ mean: number[][]; pairs: [number, number][]; value: number[][] }>("GET", `/api/v1/analyses/${analysisId}/correlators`, { as: analyst });
    nearRows(body.mean, deterministic.mean);
    for (const [k, matrix] of Object.entries(deterministic.correlators_at)) {
      body.pairs.forEach(([i, j], pair) => near(body.value[Number(k)][pair], matrix[i][j]));
    }
  });

  it("has the traces to 1e-9 and their errors within the Monte Carlo noise of both", async () => {
    const body = await callJson<TracesBody>("GET", `/api/v1/analyses/${analysisId}/traces`, { as: analyst });
    nearRows([body.distances], [deterministic.distances]);
    nearRows(body.value, deterministic.traces);
    const tolerance = 7 * Math.sqrt(1 / (2 * statistical.B) + 1 / (2 * OUR_REPLICATES));
    statistical.traceError.forEach((row, trace) =>
      row.forEach((error, k) => expect(Math.abs(body.error[trace][k] - error)).toBeLessThanOrEqual(tolerance * error + 1e-12)),
    );
  });

  it("has the crossing times of both methods to 1e-9", async () => {
    const firstId = await analyse(analyst, runId, settings("first"));
    const isotonic = await callJson<FrontBody>("GET", `/api/v1/analyses/${analysisId}/front`, { as: analyst });
    const first = await callJson<FrontBody>("GET", `/api/v1/analyses/${firstId}/front`, { as: analyst });
    let compared = 0;
    for (const [front, times] of [
      [isotonic, deterministic.crossing_isotonic_us],
      [first, deterministic.crossing_first_us],
    ] as const) {
      front.points.forEach(({ time_us, status }, trace) => {
        if (status !== "resolved" && status !== "at-start") return;
        near(time_us, times[trace]);
        compared += 1;
      });
    }
    expect(compared).toBeGreaterThanOrEqual(6);
  });

  it("has crossing errors, fits and verdict within the stated noise", async () => {
    const front = await callJson<FrontBody>("GET", `/api/v1/analyses/${analysisId}/front`, { as: analyst });
    const ratios = front.points
      .flatMap(({ error_us }, trace) => (statistical.crossing_us[trace] !== null && error_us && statistical.crossingError_us[trace] > 0 ? [error_us / statistical.crossingError_us[trace]] : []))
      .sort((low, high) => low - high);
    expect(ratios[Math.floor(ratios.length / 2)]).toBeGreaterThan(0.85);
    expect(ratios[Math.floor(ratios.length / 2)]).toBeLessThan(1.15);
    const { linear, powerLaw } = statistical;
    expect(Math.abs(front.linear.t0_us.value - linear.t0_us)).toBeLessThan(0.5 * linear.t0_error);
    expect(Math.abs(front.linear.v_sites_per_ms.value / 1000 - linear.v_sites_per_us)).toBeLessThan(0.5 * linear.v_error);
    expect(Math.abs(front.powerLaw.gamma.value - powerLaw.gamma)).toBeLessThan(0.5 * powerLaw.gamma_error);
    expect(Math.abs(front.powerLaw.beta.value - powerLaw.beta)).toBeLessThan(0.5 * powerLaw.beta_error);
    expect(front.verdict).toBe(statistical.verdict);
  });

  it("has the maximum-likelihood mixture of every site, and the threshold it advises", async () => {
    const detection = await makeDetection(analyst, runId, { method: "mixture" });
    expected.mixture.sites.forEach((site, i) => {
      const found = detection.mixture[i];
      expect(Math.abs((found?.dark ?? Number.NaN) / site.dark - 1)).toBeLessThan(1e-5);
      expect(Math.abs((found?.bright ?? Number.NaN) / site.bright - 1)).toBeLessThan(1e-5);
      expect(Math.abs((found?.brightWeight ?? Number.NaN) / site.brightWeight - 1)).toBeLessThan(1e-5);
      expect(detection.thresholds[i]).toBe(site.threshold);
      expect(detection.falseBright[i]).toBeCloseTo(site.falseBright, 6);
      expect(detection.falseDark[i]).toBeCloseTo(site.falseDark, 6);
    });
  });

  it("has the error rates of its calibration shots, when there are any", async () => {
    const detection = await callJson<{ falseBright: number[]; falseDark: number[] }>("GET", `/api/v1/detections/${detectionId}`, { as: analyst });
    const rates = expected.calibration;
    expect(detection.falseBright).toHaveLength(deterministic.sites);
    rates?.falseBright.forEach((rate, i) => expect(Math.abs(detection.falseBright[i] - rate)).toBeLessThan(1e-12));
    rates?.falseDark.forEach((rate, i) => expect(Math.abs(detection.falseDark[i] - rate)).toBeLessThan(1e-12));
  });
});
