import { pairIndex } from "@/lib/science/correlators/pairs";

/**
 * Which pairs are averaged into each trace, as compressed rows:
 * trace q is the mean over `pairs[offsets[q]] … pairs[offsets[q + 1] − 1]` (indices into the pair list).
 */
export interface TracePlan {
  kind: "reference" | "distance";
  /** `[trace]`, short names such as "site 4" or "d = 1.41". */
  labels: string[];
  /** `[trace]`, in units of the mean spacing. */
  distances: Float64Array;
  /** `[trace + 1]` */
  offsets: Uint32Array;
  /** Pair indices, trace after trace. */
  pairs: Uint32Array;
}

/** Returns the indices of a trace's pairs. */
export function pairsOfTrace({ offsets, pairs }: TracePlan, trace: number): Uint32Array {
  return pairs.subarray(offsets[trace], offsets[trace + 1]);
}

/** Where the sites are, in units of the mean spacing. */
export interface SitePositions {
  /** `[site]` */
  x: Float64Array;
  /** `[site]`; null for a chain. */
  y: Float64Array | null;
}

/** Distances closer than this are one distance. */
const SAME_DISTANCE = 1e-6;

interface PlacedPair {
  pair: number;
  distance: number;
}

/** Returns the Euclidean distance of two sites. */
export function siteDistance(positions: SitePositions, i: number, j: number): number {
  const dx = positions.x[j] - positions.x[i];
  return positions.y === null ? Math.abs(dx) : Math.hypot(dx, positions.y[j] - positions.y[i]);
}

/**
 * Returns one trace C_rj for every site j but the reference r, in site order. Throws RangeError when the reference is
 * no site.
 */
export function planReferenceTraces(positions: SitePositions, reference: number): TracePlan {
  const sites = positions.x.length;
  requireSite(reference, sites);
  const others = Array.from({ length: sites }, (_, j) => j).filter((j) => j !== reference);
  return {
    kind: "reference",
    labels: others.map((j) => `site ${j}`),
    distances: Float64Array.from(others, (j) => siteDistance(positions, reference, j)),
    offsets: Uint32Array.from({ length: others.length + 1 }, (_, q) => q),
    pairs: Uint32Array.from(others, (j) => pairIndex(sites, reference, j)),
  };
}

/**
 * Returns one trace for each distance, increasing, over all pairs or those with both sites in `bulk`. Distances equal
 * within 1e-6 share a trace. Where positions are so irregular that more than N − 1 distances would be left (a regular
 * chain or rectangle of N sites has at most that many), pairs are put in bins one mean spacing wide, centred on the
 * whole numbers from 1, each placed at its pairs' mean distance. Throws RangeError when a bulk site is no site.
 */
export function planDistanceTraces(positions: SitePositions, bulk?: readonly number[]): TracePlan {
  const sites = positions.x.length;
  const placed = placePairs(positions, bulk ?? Array.from({ length: sites }, (_, i) => i));
  const exact = groupWhile(placed, (first, next) => next.distance - first.distance <= SAME_DISTANCE);
  if (exact.length <= sites - 1) return fromGroups(exact);
  return fromGroups(groupWhile(placed, (first, next) => unitBin(first.distance) === unitBin(next.distance)));
}

function placePairs(positions: SitePositions, bulk: readonly number[]): PlacedPair[] {
  const sites = positions.x.length;
  const members = [...new Set(bulk)].sort((i, j) => i - j);
  members.forEach((i) => requireSite(i, sites));
  const placed: PlacedPair[] = [];
  members.forEach((i, at) => {
    for (const j of members.slice(at + 1)) {
      placed.push({ pair: pairIndex(sites, i, j), distance: siteDistance(positions, i, j) });
    }
  });
  return placed.sort((p, q) => p.distance - q.distance || p.pair - q.pair);
}

function unitBin(distance: number): number {
  return Math.max(1, Math.round(distance));
}

/** Cuts a sorted list where `together(first of the group, next)` fails. */
function groupWhile(
  placed: readonly PlacedPair[],
  together: (first: PlacedPair, next: PlacedPair) => boolean,
): PlacedPair[][] {
  const groups: PlacedPair[][] = [];
  for (const next of placed) {
    const group = groups.at(-1);
    if (group !== undefined && together(group[0], next)) group.push(next);
    else groups.push([next]);
  }
  return groups;
}

function fromGroups(groups: PlacedPair[][]): TracePlan {
  const offsets = new Uint32Array(groups.length + 1);
  groups.forEach((group, q) => {
    offsets[q + 1] = offsets[q] + group.length;
  });
  const distances = Float64Array.from(groups, meanDistance);
  return {
    kind: "distance",
    labels: Array.from(distances, (d) => `d = ${Number(d.toFixed(2))}`),
    distances,
    offsets,
    pairs: Uint32Array.from(groups.flatMap((group) => group.map(({ pair }) => pair).sort((p, q) => p - q))),
  };
}

function meanDistance(group: readonly PlacedPair[]): number {
  const nearest = group[0].distance;
  return nearest + group.reduce((sum, { distance }) => sum + (distance - nearest), 0) / group.length;
}

function requireSite(i: number, sites: number): void {
  if (!(Number.isInteger(i) && i >= 0 && i < sites)) throw new RangeError(`Site ${i} is not one of ${sites}`);
}
