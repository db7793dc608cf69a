import type { TraceSet } from "@/lib/science/front/trace-set";
import { createRandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { drawNormal } from "@/lib/science/stats/random-variates";

export interface Cone {
  distances: number[];
  times_us: number[];
  /** Exact time at which each distance's signal reaches a tenth of its maximum. */
  front_us: (distance: number) => number;
  /** Time from there to the maximum. */
  rise_us: number;
  amplitude: number;
  noise: number;
}

/** The noiseless signal: 0 long before the front, a tenth of the amplitude at it, a smooth maximum `rise_us` later. */
function signal(cone: Cone, distance: number, time_us: number): number {
  const phase = (time_us - cone.front_us(distance)) / cone.rise_us;
  const start = Math.acos(1 - 2 * 0.1) / Math.PI;
  const angle = Math.PI * Math.min(2, Math.max(0, start + (1 - start) * phase));
  return (cone.amplitude * (1 - Math.cos(angle))) / 2;
}

/** One noisy measurement of the cone, with Gaussian replicates around what was measured. */
export function measureCone(cone: Cone, replicateCount: number, seed: number): TraceSet {
  const { distances, times_us, noise } = cone;
  const stream = createRandomStream(seed, RANDOM_PURPOSES.simulation, 0);
  const normal = () => drawNormal(stream);
  const timeCount = times_us.length;
  const value = new Float64Array(distances.length * timeCount);
  const replicates = new Float64Array(value.length * replicateCount);
  distances.forEach((distance, j) => {
    times_us.forEach((time_us, k) => {
      const measured = signal(cone, distance, time_us) + noise * normal();
      value[j * timeCount + k] = measured;
      const offset = (k * distances.length + j) * replicateCount;
      for (let b = 0; b < replicateCount; b++) replicates[offset + b] = measured + noise * normal();
    });
  });
  return {
    labels: distances.map((d) => `d = ${d}`),
    distances: Float64Array.from(distances),
    times_us: Float64Array.from(times_us),
    shotsPerTime: new Float64Array(timeCount).fill(1000),
    value,
    error: value.map(() => noise),
    replicateCount,
    replicates,
  };
}
