/**
 * What each step of an analysis costs in one thread, summed over all times of a run; medians. Arguments: file, rounds. Prints a table.
 */
import { analyseTime, type TimeTask } from "@/lib/science/correlators/analyse-time";
import { collectTraces } from "@/lib/science/correlators/collect-traces";
import { countUps } from "@/lib/science/correlators/connected-correlators";
import { drawBlock, prepareJointBootstrap } from "@/lib/science/correlators/joint-bootstrap";
import { packSpins, type PackedSpins } from "@/lib/science/correlators/packed-spins";
import { pairCount } from "@/lib/science/correlators/pairs";
import { simultaneousBands } from "@/lib/science/correlators/simultaneous-bands";
import { planDistanceTraces, planReferenceTraces } from "@/lib/science/correlators/trace-plan";
import { analyseFront, crossingsOf } from "@/lib/science/front/analyse-front";
import { DEFAULT_FRONT_RULE } from "@/lib/science/front/front-rule";
import { readSurrogateRun } from "@/scripts/bench/npz-counts";

const REPLICATES = 1000;
const [file, rounds] = process.argv.slice(2);
const run = readSurrogateRun(file);
const chain = { x: Float64Array.from({ length: run.sites }, (_, i) => i), y: null };
const reference = planReferenceTraces(chain, 0);
const measured = new Map<string, number[]>();

for (let round = 0; round <= Number(rounds); round++) {
  // The first round compiles and fills the caches.
  if (round === 1) measured.clear();
  const spins = timed("counts to packed spins", () => Array.from(run.times_us, (_, k) => spinsAt(k)));
  timed("means and all pairs", () => spins.map(countUps));
  timed("draws, single shots", () => spins.forEach((one, k) => drawAll(one, k, 1)));
  timed("draws, blocks of 50 shots", () => spins.forEach((one, k) => drawAll(one, k, 50)));
  timed("one time after another, plain, reference traces", () => spins.map((one, k) => analyseTime(taskOf(one, k, { pairErrors: "replicates" }))));
  timed("one time after another, distance averages", () => spins.map((one, k) => analyseTime(taskOf(one, k, { plan: planDistanceTraces(chain) }))));
  const results = timed("one time after another, reference traces", () => spins.map((one, k) => analyseTime(taskOf(one, k, {}))));
  const preview = timed("preview: values and traces", () => spins.map((one, k) => analyseTime(taskOf(one, k, { replicates: 0 }))));
  const shown = collectTraces(reference, run.times_us, preview, 0);
  timed("preview: crossings", () => crossingsOf(shown, { ...DEFAULT_FRONT_RULE, minSignal: 0 }));
  const traces = collectTraces(reference, run.times_us, results, REPLICATES);
  timed("crossings, fits and verdict, isotonic", () => analyseFront(traces, DEFAULT_FRONT_RULE));
  timed("crossings, fits and verdict, first", () => analyseFront(traces, { ...DEFAULT_FRONT_RULE, method: "first" }));
  timed("simultaneous bands", () => simultaneousBands(traces));
}
for (const [name, times] of measured) console.log(`${name.padEnd(50)} ${median(times).toFixed(1).padStart(8)} ms`);

function timed<T>(name: string, work: () => T): T {
  const start = performance.now();
  const result = work();
  measured.set(name, [...(measured.get(name) ?? []), performance.now() - start]);
  return result;
}

function spinsAt(k: number): PackedSpins {
  const { counts, shots, sites } = run;
  return packSpins(new Uint16Array(counts, k * shots * sites * 2, shots * sites), shots, sites, new Float64Array(sites).fill(4.5), "up");
}

function taskOf(spins: PackedSpins, timeIndex: number, changes: Partial<TimeTask>): TimeTask {
  const fixed = { readout: null, estimator: "plug-in", seed: 1, interval: "percentile", blockLength: 1, pairErrors: "law" } as const;
  return { timeIndex, spins, plan: reference, replicates: REPLICATES, ...fixed, ...changes };
}

function drawAll(spins: PackedSpins, timeIndex: number, blockLength: number): void {
  const needed = new Uint8Array(pairCount(spins.sites)).fill(1, 0, 1);
  const bootstrap = prepareJointBootstrap({ spins, readout: null, replicates: REPLICATES, seed: 1, blockLength, timeIndex, needed, traceCount: 0 });
  for (let block = 0; block < bootstrap.layout.blocks; block++) drawBlock(bootstrap, block);
}

function median(values: number[]): number {
  return [...values].sort((a, b) => a - b)[Math.floor(values.length / 2)];
}
