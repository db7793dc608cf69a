import type { FrontPoints } from "@/lib/science/front/front-points";
import type { FrontCurve } from "@/lib/science/front/front-result";
import { finiteOrNull } from "@/lib/science/front/parameter";
import type { ReplicateFits } from "@/lib/science/front/replicate-fits";
import { summariseReplicates } from "@/lib/science/front/replicate-summary";

const SAMPLES = 49;

/** A fitted model: its coefficients, those of its replicates, and τ in µs as a function of them and the distance. */
export interface FittedModel {
  offset: number;
  slope: number;
  replicates: ReplicateFits;
}

/** Returns τ of the straight front at a distance. */
export function linearTime_us(offset: number, slope: number, distance: number): number {
  return offset + slope * distance;
}

/** Returns τ of the power law at a distance. */
export function powerLawTime_us(offset: number, slope: number, distance: number): number {
  return Math.exp(offset + slope * Math.log(distance));
}

/** Returns the model from the nearest to the farthest fitted point, with its pointwise 95 % band over replicates. */
export function frontCurve(
  points: FrontPoints,
  { offset, slope, replicates }: FittedModel,
  time_us: (offset: number, slope: number, distance: number) => number,
): FrontCurve {
  const near = points.distance.reduce((least, d) => Math.min(least, d), Infinity);
  const far = points.distance.reduce((most, d) => Math.max(most, d), -Infinity);
  const curve: FrontCurve = { distance: [], time_us: [], low_us: [], high_us: [] };
  for (let sample = 0; sample < SAMPLES; sample++) {
    const distance = near + ((far - near) * sample) / (SAMPLES - 1);
    const spread = summariseReplicates(replicates.offset.map((o, b) => time_us(o, replicates.slope[b], distance)));
    curve.distance.push(distance);
    curve.time_us.push(finiteOrNull(time_us(offset, slope, distance)));
    curve.low_us.push(finiteOrNull(spread.low));
    curve.high_us.push(finiteOrNull(spread.high));
  }
  return curve;
}
