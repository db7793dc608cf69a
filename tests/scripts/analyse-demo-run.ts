import { readFileSync } from "node:fs";
import { gunzipSync } from "fflate";
import { analyseTime } from "@/lib/science/correlators/analyse-time";
import { collectTraces } from "@/lib/science/correlators/collect-traces";
import { packSpins } from "@/lib/science/correlators/packed-spins";
import {
  drawReadoutReplicates,
  exactReadoutCorrection,
  type ReadoutCorrection,
} from "@/lib/science/correlators/readout-correction";
import { planReferenceTraces } from "@/lib/science/correlators/trace-plan";
import type { CalibrationCounts } from "@/lib/science/detection/calibration";
import { detect, type DetectedSite } from "@/lib/science/detection/detect";
import { countHistograms } from "@/lib/science/detection/histogram";
import { analyseFront } from "@/lib/science/front/analyse-front";
import type { FrontResult } from "@/lib/science/front/front-result";
import { DEFAULT_FRONT_RULE } from "@/lib/science/front/front-rule";
import type { TraceSet } from "@/lib/science/front/trace-set";
import { readNpz } from "../read-npz";

/** A shipped run as its file has it; the same number of shots at every time. */
export interface DemoCounts {
  times_us: Float64Array;
  shots: number;
  sites: number;
  /** `[k][shot][site]` */
  counts: Uint16Array;
  calibration: CalibrationCounts | null;
}

/** Reads a shipped NPZ independently of the product's readers. */
export function readDemoNpz(file: string): DemoCounts {
  const arrays = readNpz(`sample-data/${file}`);
  const [, shots, sites] = arrays.counts.shape;
  const dark = arrays.calibration_dark;
  const bright = arrays.calibration_bright;
  return {
    times_us: arrays.times_us.values,
    shots,
    sites,
    counts: Uint16Array.from(arrays.counts.values),
    calibration:
      dark === undefined
        ? null
        : { sites, dark: Uint16Array.from(dark.values), bright: Uint16Array.from(bright.values) },
  };
}

/** Reads a shipped table of one row a shot, sorted by time, independently of the product's readers. */
export function readDemoCsv(file: string): DemoCounts {
  const text = new TextDecoder().decode(gunzipSync(readFileSync(`sample-data/${file}`)));
  const [head, ...rows] = text
    .trimEnd()
    .split("\n")
    .filter((line) => !line.startsWith("#"))
    .map((line) => line.split(","));
  const times_us = Float64Array.from(new Set(rows.map(([time]) => Number(time))));
  return {
    times_us,
    shots: rows.length / times_us.length,
    sites: head.length - 2,
    counts: Uint16Array.from(rows.flatMap((row) => row.slice(2).map(Number))),
    calibration: null,
  };
}

export interface AnalysedDemo {
  sites: DetectedSite[];
  traces: TraceSet;
  /** `[k][trace]`, 1 where no bootstrap error covers. */
  fewFlips: Uint8Array[];
  front: FrontResult;
}

const REPLICATES = 1000;
const SEED = 1;

/** Analyses a shipped run the way `runs.json` asks for: from site 0, 1000 replicates, seed 1. */
export function analyseDemo(run: DemoCounts, corrected: boolean): AnalysedDemo {
  const detected = detect({
    method: run.calibration === null ? "mixture" : "calibration",
    model: "auto", thresholdScope: "site", thresholds: null,
    histograms: countHistograms(run.counts, run.sites),
    countKind: "whole",
    calibration: run.calibration,
  });
  if (detected.kind === "refused") throw new Error(detected.message);
  const thresholds = Float64Array.from(detected.sites, ({ threshold }) => threshold);
  const plan = planReferenceTraces({ x: Float64Array.from({ length: run.sites }, (_, i) => i), y: null }, 0);
  const size = run.shots * run.sites;
  const shotsAt = (k: number) => run.counts.subarray(k * size, (k + 1) * size);
  const readout = corrected ? readoutOf(detected.sites) : null;
  const results = Array.from(run.times_us, (_, timeIndex) =>
    analyseTime({
      timeIndex,
      spins: packSpins(shotsAt(timeIndex), run.shots, run.sites, thresholds, "up"),
      estimator: "plug-in",
      readout,
      plan,
      replicates: REPLICATES,
      seed: SEED,
      interval: "percentile",
      blockLength: 1,
      pairErrors: "law",
    }),
  );
  const traces = collectTraces(plan, run.times_us, results, REPLICATES);
  const { front } = analyseFront(traces, DEFAULT_FRONT_RULE);
  return { sites: detected.sites, traces, fewFlips: results.map(({ traceFewFlips }) => traceFewFlips), front };
}

function readoutOf(sites: DetectedSite[]): ReadoutCorrection {
  const column = (value: (site: DetectedSite) => number | undefined | null) =>
    Float64Array.from(sites, (site) => value(site) ?? Number.NaN);
  const exact = exactReadoutCorrection(
    { falseBright: column((site) => site.falseBright), falseDark: column((site) => site.falseDark) },
    "up",
  );
  const evidence = {
    falseBrightShots: column((site) => site.evidence?.dark.errors),
    darkShots: column((site) => site.evidence?.dark.shots),
    falseDarkShots: column((site) => site.evidence?.bright.errors),
    brightShots: column((site) => site.evidence?.bright.shots),
  };
  return { ...exact, replicates: drawReadoutReplicates(evidence, "up", SEED, REPLICATES) };
}
