import { beforeAll, describe, expect, it } from "vitest";
import { call, callJson, problemIn, type Credentials } from "./client";
import { makeGroup, makeSignedIn } from "./factories";
import { analyse, fixture, makeDetection, makeRun, uploadAndRead } from "./product";

/** One simulated run, analysed with every choice through the HTTP API. */
let analyst: Credentials;
let runId: string;
let detectionId: string;

interface CorrelatorsBody {
  value: number[][];
  error: number[][];
  low: number[][];
  high: number[][];
  pValue: number[][];
  significant: boolean[][];
}

interface TracesBody {
  value: number[][];
  error: number[][];
  low: number[][];
  high: number[][];
  bandLow: number[][];
  bandHigh: number[][];
  significant: boolean[][];
}

interface FrontBody {
  powerLaw: { fittedIn: string; gamma: { value: number; error: number } };
  verdict: string;
}

beforeAll(async () => {
  analyst = (await makeSignedIn(await makeGroup(), "analyst")).credentials;
  runId = await makeRun(analyst);
  await uploadAndRead(analyst, runId, "shots.npz", fixture("runs/xy-chain-12/shots.npz"));
  detectionId = (await makeDetection(analyst, runId, { method: "mixture" })).id;
});

/** Analyses with the given choices and returns what three endpoints answer. */
async function analysed(choices: Record<string, unknown>) {
  const id = await analyse(analyst, runId, { detectionId, ...choices });
  const get = <T>(what: string) => callJson<T>("GET", `/api/v1/analyses/${id}/${what}`, { as: analyst });
  return { correlators: await get<CorrelatorsBody>("correlators"), traces: await get<TracesBody>("traces"), front: await get<FrontBody>("front") };
}

function meanOf(rows: number[][]): number {
  const flat = rows.flat();
  return flat.reduce((sum, value) => sum + value, 0) / flat.length;
}

describe("an analysis", () => {
  it("tests every pair against C = 0, and gives traces bands wider than their intervals", async () => {
    const { correlators, traces } = await analysed({});
    const flags = correlators.significant.flat();
    expect(flags.length).toBe(correlators.pValue.flat().length);
    expect(flags.some(Boolean)).toBe(true);
    expect(flags.every(Boolean)).toBe(false);
    correlators.pValue.forEach((row, k) => row.forEach((p, pair) => p > 0.05 && expect(correlators.significant[k][pair]).toBe(false)));
    traces.bandLow.forEach((row, q) => row.forEach((low, k) => expect(low).toBeLessThanOrEqual(traces.value[q][k])));
    const width = (low: number[][], high: number[][]) => meanOf(high.map((row, q) => row.map((end, k) => end - low[q][k])));
    expect(width(traces.bandLow, traces.bandHigh)).toBeGreaterThan(1.2 * width(traces.low, traces.high));
  });

  it("gives basic intervals that mirror the percentile ones about the estimate", async () => {
    const percentile = (await analysed({ bootstrap: { interval: "percentile" } })).correlators;
    const basic = (await analysed({ bootstrap: { interval: "basic" } })).correlators;
    basic.low.forEach((row, k) => row.forEach((low, pair) => expect(low).toBeCloseTo(2 * percentile.value[k][pair] - percentile.high[k][pair], 12)));
  });

  it("resamples blocks of shots, and refuses blocks too long for the fewest shots", async () => {
    const single = (await analysed({})).correlators;
    const blocks = (await analysed({ bootstrap: { blockLength: 20 } })).correlators;
    expect(blocks.value).toEqual(single.value);
    // Simulated shots do not resemble their neighbours, so blocks change little.
    expect(Math.abs(meanOf(blocks.error) / meanOf(single.error) - 1)).toBeLessThan(0.1);
    const refused = await call("POST", `/api/v1/runs/${runId}/analyses`, { as: analyst, json: { detectionId, bootstrap: { blockLength: 5000 } } });
    expect(refused.status).toBe(422);
    expect((await problemIn(refused)).errors?.[0].where).toBe("bootstrap.blockLength");
  });

  it.each(["isotonic", "first", "last-upcrossing"])("reads crossings by the method %s", async (method) => {
    const { front } = await analysed({ front: { method } });
    expect(front.powerLaw.gamma.value).toBeGreaterThan(0);
  });

  it("fits the power law in τ itself when asked", async () => {
    const { front } = await analysed({ front: { powerLawIn: "time" } });
    expect(front.powerLaw.fittedIn).toBe("time");
  });

  it("reads counts without thresholds, close to thresholds where the histograms hardly overlap", async () => {
    const threshold = (await analysed({ readoutCorrection: true })).correlators;
    const soft = (await analysed({ reading: "threshold-free" })).correlators;
    let within = 0;
    soft.value.forEach((row, k) => row.forEach((value, pair) => Math.abs(value - threshold.value[k][pair]) < 2 * threshold.error[k][pair] && (within += 1)));
    expect(within / soft.value.flat().length).toBeGreaterThan(0.95);
    expect(soft.value).not.toEqual(threshold.value);
  });

  it("refuses a readout correction where there is no threshold", async () => {
    const refused = await call("POST", `/api/v1/runs/${runId}/analyses`, { as: analyst, json: { detectionId, reading: "threshold-free", readoutCorrection: true } });
    expect(refused.status).toBe(422);
    expect((await problemIn(refused)).errors?.[0].where).toBe("readoutCorrection");
  });
});
