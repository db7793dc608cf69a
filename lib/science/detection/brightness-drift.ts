/** How a site's brightness differs between the earlier and the later shots of each time, over all times. */
export interface SiteDrift {
  /** (later − earlier) / mean of both. */
  change: number;
  /** The difference in units of its standard error. */
  significance: number;
}

/** Sums of counts over runs of consecutive shots of one time, few of them however many shots there are. */
export interface SegmentSums {
  sites: number;
  /** Shots in a full segment. */
  length: number;
  /** Shots taken so far. */
  shots: number;
  /** `[segment][site]` */
  sums: Float64Array;
  /** `[site]`, sums of squares over all shots. */
  squares: Float64Array;
}

const SEGMENTS = 8;
const CLEAR = 5;
const NOTABLE = 0.02;

/** Returns empty sums for the shots of one time. */
export function createSegmentSums(sites: number): SegmentSums {
  return { sites, length: 1, shots: 0, sums: new Float64Array(SEGMENTS * sites), squares: new Float64Array(sites) };
}

/** Adds the next shot, whose counts start at `counts[at]`; full segments are joined in pairs, so that memory does not grow. */
export function addToSegments(segments: SegmentSums, counts: Uint16Array | Float32Array, at: number): void {
  if (segments.shots === SEGMENTS * segments.length) joinPairs(segments);
  const { sites, sums, squares } = segments;
  const row = Math.floor(segments.shots / segments.length) * sites;
  for (let i = 0; i < sites; i++) {
    const count = counts[at + i];
    sums[row + i] += count;
    squares[i] += count * count;
  }
  segments.shots += 1;
}

function joinPairs(segments: SegmentSums): void {
  const { sites, sums } = segments;
  for (let segment = 0; segment < SEGMENTS / 2; segment++) {
    for (let i = 0; i < sites; i++) sums[segment * sites + i] = sums[2 * segment * sites + i] + sums[(2 * segment + 1) * sites + i];
  }
  sums.fill(0, (SEGMENTS / 2) * sites);
  segments.length *= 2;
}

/**
 * Returns the drift of every site, `[site]`: the difference of the later and the earlier half of the shots of each time, averaged over times with
 * inverse variances from the shot-to-shot scatter, so that what differs between times does not matter. 0 where nothing scatters.
 */
export function brightnessDrift(times: readonly SegmentSums[], sites: number): SiteDrift[] {
  return Array.from({ length: sites }, (_, i) => {
    let weights = 0;
    let differences = 0;
    let levels = 0;
    for (const time of times) {
      const halves = compareHalves(time, i);
      if (halves === null) continue;
      weights += 1 / halves.variance;
      differences += halves.difference / halves.variance;
      levels += halves.level / halves.variance;
    }
    if (weights === 0) return { change: 0, significance: 0 };
    return { change: levels === 0 ? 0 : differences / levels, significance: differences / Math.sqrt(weights) };
  });
}

function compareHalves({ sites, length, shots, sums, squares }: SegmentSums, i: number) {
  const used = Math.ceil(shots / length);
  const early = Math.floor(used / 2) * length;
  const late = shots - early;
  if (early < 2 || late < 2) return null;
  let earlySum = 0;
  let sum = 0;
  for (let segment = 0; segment < used; segment++) {
    const value = sums[segment * sites + i];
    sum += value;
    if (segment * length < early) earlySum += value;
  }
  const mean = sum / shots;
  const scatter = squares[i] / shots - mean * mean;
  const variance = scatter * (1 / early + 1 / late);
  if (!(variance > 0)) return null;
  const [earlyMean, lateMean] = [earlySum / early, (sum - earlySum) / late];
  return { difference: lateMean - earlyMean, level: (lateMean + earlyMean) / 2, variance };
}

/** Returns what a clear drift warns of, or null: more than five standard errors and more than 2 % of the brightness. */
export function driftWarning({ change, significance }: SiteDrift): { code: "brightness-drift"; message: string } | null {
  if (!(Math.abs(significance) > CLEAR && Math.abs(change) > NOTABLE)) return null;
  const direction = change < 0 ? "fell" : "rose";
  return {
    code: "brightness-drift",
    message: `The brightness ${direction} by ${(100 * Math.abs(change)).toFixed(1)} % between the earlier and the later shots of each time: one threshold may not fit all shots, and error bars may need blocks of shots.`,
  };
}
