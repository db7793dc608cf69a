import { gzipSync } from "fflate";
import { writeNpz } from "@/lib/formats/write-npz";
import { createRandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import type { Detector } from "@/lib/science/theory/measured-counts";
import { simulateCalibration, simulateQuench, simulateSurrogate, type SimulatedRun } from "./simulate";

export const DEMO_SEED = 20_261_201;

/** Returns the files of the demo by name; the same bytes every time. */
export function demoFiles(): Record<string, Uint8Array> {
  return { ...xyChain(), ...isingChain(), ...straightChain() };
}

function evenTimes(first: number, last: number, count: number): number[] {
  return Array.from({ length: count }, (_, k) => Number((first + ((last - first) * k) / (count - 1)).toFixed(1)));
}

/** Every site is a little different, as in any real trap. */
function variedDetector(sites: number, seed: number, range: { dark: [number, number]; bright: [number, number] }, leaks = { darkLeak: 0, brightLeak: 0 }): Detector {
  const stream = createRandomStream(seed, RANDOM_PURPOSES.simulation, 200_000);
  const between = ([low, high]: [number, number]) => low + (high - low) * stream.nextUniform();
  return {
    dark: Float64Array.from({ length: sites }, () => between(range.dark)),
    bright: Float64Array.from({ length: sites }, () => between(range.bright)),
    ...leaks,
  };
}

function xyChain(): Record<string, Uint8Array> {
  const seed = DEMO_SEED + 1;
  const detector = variedDetector(11, seed, { dark: [0.5, 1.1], bright: [11, 16] });
  const run = simulateQuench({ model: "xy", sites: 11, alpha: 0.9, j0Hz: 420, times_us: evenTimes(10, 380, 30), shots: 1200, detector, seed });
  return { "xy-chain.csv.gz": gzipSync(new TextEncoder().encode(shotsCsv(run)), { level: 9, mtime: 0 }) };
}

function isingChain(): Record<string, Uint8Array> {
  const seed = DEMO_SEED + 2;
  const detector = variedDetector(10, seed, { dark: [0.8, 1.5], bright: [7.5, 10] }, { darkLeak: 0.05, brightLeak: 0.05 });
  const run = simulateQuench({ model: "ising", sites: 10, alpha: 0.6, j0Hz: 330, times_us: evenTimes(10, 380, 28), shots: 1000, detector, seed });
  const calibration = (prepared: "dark" | "bright") => ({ shape: [1000, 10], values: simulateCalibration(prepared, 1000, detector, seed) });
  return { "ising-chain.npz": writeNpz({ ...runArrays(run), calibration_dark: calibration("dark"), calibration_bright: calibration("bright") }) };
}

function straightChain(): Record<string, Uint8Array> {
  const seed = DEMO_SEED + 3;
  const detector = variedDetector(20, seed, { dark: [0.3, 0.6], bright: [7, 10] });
  // Close while the front passes, then wide: each trace must near its plateau, or the window bends the front.
  const times_us = [...evenTimes(2, 66, 26), ...evenTimes(90, 360, 10)];
  const run = simulateSurrogate({ sites: 20, speed: 0.25, times_us, shots: 1000, detector, seed });
  return { "straight-chain.npz": writeNpz(runArrays(run)) };
}

function runArrays({ sites, times_us, shots, counts }: SimulatedRun) {
  return {
    counts: { shape: [times_us.length, shots, sites], values: counts },
    times_us: { shape: [times_us.length], values: Float64Array.from(times_us) },
  };
}

function shotsCsv({ sites, times_us, shots, counts }: SimulatedRun): string {
  const lines = ["# simulated: no real experiment stands behind these counts", ["time_us", "shot", ...Array.from({ length: sites }, (_, i) => `ion_${i}`)].join(",")];
  times_us.forEach((time, k) => {
    for (let s = 0; s < shots; s++) {
      const from = (k * shots + s) * sites;
      lines.push(`${time},${s},${counts.subarray(from, from + sites).join(",")}`);
    }
  });
  return `${lines.join("\n")}\n`;
}
