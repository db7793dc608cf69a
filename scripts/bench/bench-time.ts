import { analyseTime, type TimeResult } from "@/lib/science/correlators/analyse-time";
import { packSpins } from "@/lib/science/correlators/packed-spins";
import type { TracePlan } from "@/lib/science/correlators/trace-plan";

/** One evolution time of the timed job, and the run it is of. */
export interface BenchTask {
  counts: SharedArrayBuffer;
  shots: number;
  sites: number;
  timeIndex: number;
  replicates: number;
  plan: TracePlan;
}

/** Its result, and what it took. */
export interface BenchAnswer {
  result: TimeResult;
  threshold_ms: number;
  bootstrap_ms: number;
}

/** Thresholds, correlates and bootstraps one evolution time, as the baseline does: 4.5 for all sites, seed 1. */
export function benchTime({ counts, shots, sites, timeIndex, replicates, plan }: BenchTask): BenchAnswer {
  const start = performance.now();
  const ofTime = new Uint16Array(counts, timeIndex * shots * sites * 2, shots * sites);
  const spins = packSpins(ofTime, shots, sites, new Float64Array(sites).fill(4.5), "up");
  const packed = performance.now();
  const result = analyseTime({
    timeIndex,
    spins,
    estimator: "plug-in",
    readout: null,
    plan,
    replicates,
    seed: 1,
    interval: "percentile",
    blockLength: 1,
    pairErrors: "law",
  });
  return { result, threshold_ms: packed - start, bootstrap_ms: performance.now() - packed };
}
