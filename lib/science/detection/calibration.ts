/** Error rates and thresholds from shots in which every site was prepared dark, or bright. */
import type { ErrorRates } from "@/lib/science/detection/threshold";
import { clopperPearson, type Interval } from "@/lib/science/stats/intervals";
import { sortAscending } from "@/lib/science/stats/quantiles";

/** Complete counts of the calibration shots; both arrays `[shot][site]`. */
export interface CalibrationCounts {
  sites: number;
  dark: Uint16Array | Float32Array;
  bright: Uint16Array | Float32Array;
}

/** How many of the shots prepared one way were read the other way. */
export interface ErrorTally {
  errors: number;
  shots: number;
}

export interface CalibratedRates extends ErrorRates {
  /** 95 % Clopper–Pearson intervals. */
  falseBrightInterval: Interval;
  falseDarkInterval: Interval;
  evidence: { dark: ErrorTally; bright: ErrorTally };
}

/** Returns ε's, intervals and raw counts of one site at threshold θ; at least one shot of each kind. */
export function calibrateSite(calibration: CalibrationCounts, site: number, threshold: number): CalibratedRates {
  const darkShots = shotsOf(calibration.dark, calibration.sites);
  const brightShots = shotsOf(calibration.bright, calibration.sites);
  const falseBright = countAbove(calibration.dark, calibration.sites, site, threshold);
  const falseDark = brightShots - countAbove(calibration.bright, calibration.sites, site, threshold);
  return {
    falseBright: falseBright / darkShots,
    falseDark: falseDark / brightShots,
    falseBrightInterval: clopperPearson(falseBright, darkShots),
    falseDarkInterval: clopperPearson(falseDark, brightShots),
    evidence: {
      dark: { errors: falseBright, shots: darkShots },
      bright: { errors: falseDark, shots: brightShots },
    },
  };
}

/** Returns the number of shots in counts of layout `[shot][site]`. */
export function shotsOf(counts: Uint16Array | Float32Array, sites: number): number {
  return sites === 0 ? 0 : Math.floor(counts.length / sites);
}

/** Returns in how many shots a site counts more than θ; fractional counts are compared in float32. */
export function countAbove(counts: Uint16Array | Float32Array, sites: number, site: number, threshold: number): number {
  const compared = counts instanceof Float32Array ? Math.fround(threshold) : threshold;
  let above = 0;
  for (let at = site; at < counts.length; at += sites) if (counts[at] > compared) above += 1;
  return above;
}

/**
 * Returns the threshold with the least sum of both error shares among a site's calibration shots, of equals the lowest.
 * Whole counts: half-integers from 0.5. Fractional counts, whose unit means nothing: the middles between
 * neighbouring values that occur.
 */
export function adviseCalibrationThreshold(calibration: CalibrationCounts, site: number): number {
  const { sites } = calibration;
  const dark = siteCounts(calibration.dark, sites, site);
  const bright = siteCounts(calibration.bright, sites, site);
  const whole = calibration.dark instanceof Uint16Array && calibration.bright instanceof Uint16Array;
  const candidates = whole ? halfIntegers(dark, bright) : middles(dark, bright);
  let best = candidates[0];
  let least = Number.POSITIVE_INFINITY;
  let darkBelow = 0;
  let brightBelow = 0;
  for (const threshold of candidates) {
    while (darkBelow < dark.length && dark[darkBelow] <= threshold) darkBelow += 1;
    while (brightBelow < bright.length && bright[brightBelow] <= threshold) brightBelow += 1;
    // Over the common denominator the sums are whole numbers, so ties are exact.
    const sum = (dark.length - darkBelow) * bright.length + brightBelow * dark.length;
    if (sum >= least) continue;
    least = sum;
    best = threshold;
  }
  return best;
}

function siteCounts(counts: Uint16Array | Float32Array, sites: number, site: number): Float64Array {
  return sortAscending(Array.from({ length: shotsOf(counts, sites) }, (_, s) => counts[s * sites + site]));
}

function halfIntegers(dark: Float64Array, bright: Float64Array): number[] {
  const largest = Math.max(dark[dark.length - 1], bright[bright.length - 1]);
  return Array.from({ length: largest + 1 }, (_, n) => n + 0.5);
}

function middles(dark: Float64Array, bright: Float64Array): number[] {
  const values = sortAscending([...new Set([...dark, ...bright])]);
  if (values.length === 1) return [values[0]];
  const thresholds: number[] = [];
  for (let v = 1; v < values.length; v++) {
    const middle = Math.fround((values[v - 1] + values[v]) / 2);
    // Between two neighbouring float32 there is no middle; the lower one separates them, since θ itself reads dark.
    thresholds.push(middle < values[v] ? middle : values[v - 1]);
  }
  return thresholds;
}
