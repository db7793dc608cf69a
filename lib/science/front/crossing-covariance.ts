/** Of the replicates at least half must hold all the points, and ten for each point, for their covariance to be worth inverting. */
const LEAST_SHARE = 0.5;
const REPLICATES_PER_POINT = 10;

/**
 * Returns the bootstrap covariance `[point][point]`, µs², of the crossing times of the given traces, over the replicates in which all of them
 * cross (n − 1); or why there is none. `tau` is `[trace][replicate]`, µs.
 */
export function crossingCovariance(traces: Int32Array, tau: Float64Array, replicateCount: number): Float64Array | { reason: string } {
  const size = traces.length;
  const whole = Array.from({ length: replicateCount }, (_, b) => b).filter((b) => traces.every((j) => Number.isFinite(tau[j * replicateCount + b])));
  const least = Math.max(LEAST_SHARE * replicateCount, REPLICATES_PER_POINT * size);
  if (whole.length < least) {
    return { reason: `The joint covariance of ${size} crossing times needs ${Math.ceil(least)} replicates in which all of them cross; there are ${whole.length}.` };
  }
  const rows = Array.from(traces, (j) => {
    const values = Float64Array.from(whole, (b) => tau[j * replicateCount + b]);
    const mean = values.reduce((sum, value) => sum + value, 0) / values.length;
    return values.map((value) => value - mean);
  });
  const covariance = new Float64Array(size * size);
  for (let p = 0; p < size; p++) {
    for (let q = 0; q <= p; q++) {
      let sum = 0;
      for (let n = 0; n < whole.length; n++) sum += rows[p][n] * rows[q][n];
      covariance[p * size + q] = covariance[q * size + p] = sum / (whole.length - 1);
    }
  }
  return covariance;
}
