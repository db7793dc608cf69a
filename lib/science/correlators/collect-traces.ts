import type { TimeResult } from "@/lib/science/correlators/analyse-time";
import type { TracePlan } from "@/lib/science/correlators/trace-plan";
import type { TraceSet } from "@/lib/science/front/trace-set";

/**
 * Returns the traces of all evolution times as the front reads them, from the results in any order (their `timeIndex`
 * says where each belongs). Throws RangeError when a time is missing or there twice.
 */
export function collectTraces(
  plan: TracePlan,
  times_us: Float64Array,
  results: readonly TimeResult[],
  replicateCount: number,
): TraceSet {
  const times = times_us.length;
  const traces = plan.distances.length;
  const set: TraceSet = {
    labels: plan.labels,
    distances: plan.distances,
    times_us,
    shotsPerTime: new Float64Array(times),
    value: new Float64Array(traces * times),
    error: new Float64Array(traces * times),
    replicateCount,
    replicates: new Float64Array(times * traces * replicateCount),
  };
  const indices = new Set(results.map(({ timeIndex }) => timeIndex));
  if (results.length !== times || indices.size !== times || Math.max(...indices) >= times) {
    throw new RangeError(`${results.length} results do not make ${times} evolution times`);
  }
  for (const result of results) placeTime(set, result);
  return set;
}

function placeTime(set: TraceSet, result: TimeResult): void {
  const times = set.times_us.length;
  const k = result.timeIndex;
  set.shotsPerTime[k] = result.shots;
  set.replicates.set(result.traceReplicates, k * result.traceReplicates.length);
  for (let q = 0; q < set.labels.length; q++) {
    set.value[q * times + k] = result.traceValue[q];
    set.error[q * times + k] = result.traceError[q];
  }
}
