import { poissonErrorRates } from "@/lib/science/detection/threshold";
import { wordsPerSite, type PackedSpins } from "@/lib/science/correlators/packed-spins";
import { planDistanceTraces, type SitePositions } from "@/lib/science/correlators/trace-plan";
import { DEFAULT_FRONT_FIT_OPTIONS, DEFAULT_FRONT_RULE } from "@/lib/science/front/front-rule";
import { createRandomStream, type RandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { drawPoisson } from "@/lib/science/stats/random-variates";
import type { SweepInput } from "@/lib/science/studies/sweep-input";
import { sweepTime, type SweepTime } from "@/lib/science/studies/sweep-time";
import { drawShots } from "@/lib/science/theory/draw-shots";
import { nearestNeighbourLaws } from "@/lib/science/theory/nearest-neighbour";

const DARK = 0.6;
const BRIGHT = 11;
const THRESHOLD = 3.5;
export const THRESHOLD_SHIFTS = [-1, 0, 1];

export interface CountedRun {
  positions: SitePositions;
  times_us: Float64Array;
  shots: number;
  /** `[k]`, each `[shot][site]`. */
  counts: Uint16Array[];
  thresholds: Float64Array;
}

/** Returns photon counts of the nearest-neighbour XY chain after its quench, 4Jt from 0.1 to `last` at J/2π = 1 kHz. */
export function countedRun(sites: number, times: number, shots: number, last: number, seed: number): CountedRun {
  const times_us = Float64Array.from({ length: times }, (_, k) => ((0.1 + ((last - 0.1) * k) / (times - 1)) / (4 * 2 * Math.PI * 1000)) * 1e6);
  const counts = nearestNeighbourLaws("xy", sites, 1000, times_us).map((law, k) => {
    const stream = createRandomStream(seed, RANDOM_PURPOSES.simulation, k, 0);
    return photons(drawShots(law, shots, stream), stream);
  });
  return { positions: { x: Float64Array.from({ length: sites }, (_, i) => i), y: null }, times_us, shots, counts, thresholds: new Float64Array(sites).fill(THRESHOLD) };
}

function photons({ shots, sites, words }: PackedSpins, stream: RandomStream): Uint16Array {
  const stride = wordsPerSite(shots);
  return Uint16Array.from({ length: shots * sites }, (_, at) => {
    const shot = Math.floor(at / sites);
    const isUp = (words[(at % sites) * stride + (shot >>> 5)] >>> (shot & 31)) & 1;
    return drawPoisson(stream, isUp ? BRIGHT : DARK);
  });
}

export function sweepInputOf({ positions, times_us }: CountedRun, changes: Partial<SweepInput> = {}): SweepInput {
  const sites = positions.x.length;
  const rates = THRESHOLD_SHIFTS.map((shift) => poissonErrorRates(THRESHOLD + shift, DARK, BRIGHT));
  return {
    times_us,
    positions,
    brightIs: "up",
    estimator: "plug-in",
    rule: DEFAULT_FRONT_RULE,
    options: DEFAULT_FRONT_FIT_OPTIONS,
    traces: { kind: "reference", site: 0 },
    readoutCorrected: false,
    thresholdShifts: THRESHOLD_SHIFTS,
    readoutErrors: rates.map(({ falseBright, falseDark }) => ({ falseBright: new Float64Array(sites).fill(falseBright), falseDark: new Float64Array(sites).fill(falseDark) })),
    distancePlan: planDistanceTraces(positions),
    savedGamma: { value: 1.12, error: 0.028 },
    ...changes,
  };
}

export function sweptTimes({ counts, shots, positions, thresholds }: CountedRun, { thresholdShifts, readoutErrors, brightIs, distancePlan }: SweepInput): SweepTime[] {
  const inverseFactors = readoutErrors.map((errors) => errors && errors.falseBright.map((falseBright, i) => 1 / (1 - falseBright - errors.falseDark[i])));
  return counts.map((ofTime, timeIndex) =>
    sweepTime({ timeIndex, counts: ofTime, shots, sites: positions.x.length, thresholds, brightIs, thresholdShifts, inverseFactors, distancePlan }),
  );
}
