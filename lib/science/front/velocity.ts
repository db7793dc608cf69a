import { SAME_DISTANCE, type FrontPoints } from "@/lib/science/front/front-points";
import type { FrontVelocity } from "@/lib/science/front/front-result";
import type { LinearFrontFitted } from "@/lib/science/front/linear-front";
import { finiteOrNull } from "@/lib/science/front/parameter";
import type { PowerLawFrontFitted } from "@/lib/science/front/power-law-front";
import { summariseReplicates } from "@/lib/science/front/replicate-summary";

const US_PER_MS = 1000;

/** Returns the velocities of the fitted front; `tau` is `[trace][replicate]`, µs. */
export function velocityOf(
  points: FrontPoints,
  tau: Float64Array,
  replicateCount: number,
  linear: LinearFrontFitted | null,
  powerLaw: PowerLawFrontFitted | null,
): FrontVelocity {
  return {
    linear_sites_per_ms: linear?.front.v_sites_per_ms ?? null,
    powerLaw: powerLaw === null ? [] : powerLawVelocities(points, powerLaw),
    betweenPoints: slopesBetween(points, tau, replicateCount),
  };
}

/** v(τ) = aβτ^{β−1} in sites per µs, from ln τ = offset + slope · ln d: a τ^β = exp((ln τ − offset)/slope). */
export function powerLawVelocity(offset: number, slope: number, time_us: number): number {
  return Math.exp((Math.log(time_us) - offset) / slope) / (slope * time_us);
}

function powerLawVelocities(
  points: FrontPoints,
  { offset, slope, replicates }: PowerLawFrontFitted,
): FrontVelocity["powerLaw"] {
  return Array.from(points.time_us, (time_us, p) => {
    const spread = summariseReplicates(
      replicates.offset.map((o, b) => powerLawVelocity(o, replicates.slope[b], time_us)),
    );
    return {
      distance: points.distance[p],
      time_us,
      value_sites_per_ms: finiteOrNull(US_PER_MS * powerLawVelocity(offset, slope, time_us)),
      low_sites_per_ms: finiteOrNull(US_PER_MS * spread.low),
      high_sites_per_ms: finiteOrNull(US_PER_MS * spread.high),
    };
  });
}

/** Neighbours in distance; their errors follow to first order from the replicates of the time between them. */
function slopesBetween(points: FrontPoints, tau: Float64Array, replicateCount: number): FrontVelocity["betweenPoints"] {
  const groups = groupByDistance(points);
  return groups.slice(1).map((to, index) => {
    const from = groups[index];
    const lag = meanOf(to.members, points.time_us) - meanOf(from.members, points.time_us);
    const gap = to.distance - from.distance;
    const lags = new Float64Array(replicateCount);
    for (let b = 0; b < replicateCount; b++) {
      lags[b] =
        meanReplicate(points, to.members, tau, replicateCount, b) -
        meanReplicate(points, from.members, tau, replicateCount, b);
    }
    return {
      fromDistance: from.distance,
      toDistance: to.distance,
      time_us: (meanOf(to.members, points.time_us) + meanOf(from.members, points.time_us)) / 2,
      value_sites_per_ms: finiteOrNull((US_PER_MS * gap) / lag),
      error_sites_per_ms: finiteOrNull((US_PER_MS * gap * summariseReplicates(lags).error) / (lag * lag)),
    };
  });
}

function groupByDistance(points: FrontPoints): { distance: number; members: number[] }[] {
  const order = Array.from(points.distance.keys()).sort((p, q) => points.distance[p] - points.distance[q]);
  const groups: { distance: number; members: number[] }[] = [];
  for (const p of order) {
    const last = groups.at(-1);
    if (last !== undefined && points.distance[p] - last.distance <= SAME_DISTANCE) last.members.push(p);
    else groups.push({ distance: points.distance[p], members: [p] });
  }
  return groups;
}

function meanOf(members: number[], values: Float64Array): number {
  return members.reduce((sum, p) => sum + values[p], 0) / members.length;
}

function meanReplicate(
  points: FrontPoints,
  members: number[],
  tau: Float64Array,
  replicateCount: number,
  b: number,
): number {
  return members.reduce((sum, p) => sum + tau[points.trace[p] * replicateCount + b], 0) / members.length;
}
