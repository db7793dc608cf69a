/**
 * What one simulated run of a study costs in one thread, with 200 replicates: the null front of both models, and the self-test on a
 * straight front. Arguments: sites, times, shots, rounds. Prints a table of medians.
 */
import { planDistanceTraces } from "@/lib/science/correlators/trace-plan";
import { DEFAULT_FRONT_FIT_OPTIONS, DEFAULT_FRONT_RULE } from "@/lib/science/front/front-rule";
import { median } from "@/lib/science/stats/quantiles";
import { createRandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { nullFrontRepeat, planNullFront } from "@/lib/science/studies/null-front";
import { planSelfTest, selfTestRepeat } from "@/lib/science/studies/self-test";
import { analyseSimulatedRun, type SimulatedAnalysis, type SimulatedRun } from "@/lib/science/studies/simulated-run";
import { isStudyRefusal, type StudyRefusal } from "@/lib/science/studies/study-refusal";
import { drawShots } from "@/lib/science/theory/draw-shots";
import { gaussianLawOf } from "@/lib/science/theory/gaussian-law";

const [sites, times, shots, rounds] = process.argv.slice(2).map(Number);
const positions = { x: Float64Array.from({ length: sites }, (_, i) => i), y: null };
const times_us = Float64Array.from({ length: times }, (_, k) => (1000 * (k + 1)) / times);
/** The nearest-neighbour front comes to 0.65 N sites at the last time. */
const J_HZ = ((0.65 * sites) / 4 / 1000 / (2 * Math.PI)) * 1e6;

const analysis: SimulatedAnalysis = {
  times_us,
  shotsPerTime: new Float64Array(times).fill(shots),
  readoutErrors: { falseBright: new Float64Array(sites).fill(0.01), falseDark: new Float64Array(sites).fill(0.03) },
  readoutCorrected: true,
  brightIs: "up",
  estimator: "plug-in",
  interval: "percentile",
  traces: planDistanceTraces(positions),
  rule: DEFAULT_FRONT_RULE,
  options: DEFAULT_FRONT_FIT_OPTIONS,
  replicates: 200,
  seed: 1,
};

console.log(`N = ${sites}, T = ${times}, M = ${shots}, B = 200, one thread; milliseconds`);
for (const model of ["xy", "ising"] as const) {
  const plan = timed(`null front ${model}: plan`, 1, () => made(planNullFront({ ...analysis, model, positions, jMax_hz: J_HZ, observedPoints: [] })));
  timed(`null front ${model}: draws of one run`, rounds, (round) => drawAll(plan.run, round));
  timed(`null front ${model}: one run`, rounds, (round) => nullFrontRepeat(plan, round));
}
const straight = straightRun();
const { front } = timed("one analysed run, straight front", rounds, (round) => analyseSimulatedRun(straight, round));
const traces = analysis.traces;
const value = Float64Array.from({ length: traces.distances.length * times }, (_, at) => straightSignal(traces.distances[Math.floor(at / times)], times_us[at % times]));
const selfTest = timed("self-test: plan", 1, () =>
  made(
    planSelfTest({
      ...analysis,
      positions,
      means: new Float64Array(sites * times),
      observedTraces: { ...traces, times_us, shotsPerTime: analysis.shotsPerTime, value, error: value.map(() => 0.01), replicateCount: 0, replicates: new Float64Array(0) },
      observedFront: front,
    }),
  ),
);
timed("self-test: draws of one run", rounds, (round) => drawAll(selfTest.run, round));
timed("self-test: one run", rounds, (round) => selfTestRepeat(selfTest, round));

function straightSignal(distance: number, time_us: number): number {
  const scaled = (1050 * distance) / sites / time_us;
  return 0.3 * Math.exp(-scaled * scaled);
}

function straightRun(): SimulatedRun {
  const laws = Array.from(times_us, (time) => {
    const correlator: number[] = [];
    for (let i = 0; i < sites; i++) for (let j = i + 1; j < sites; j++) correlator.push(straightSignal(j - i, time));
    return gaussianLawOf({ mean: new Float64Array(sites), correlator: Float64Array.from(correlator) }).law;
  });
  return { ...analysis, laws, purpose: RANDOM_PURPOSES.simulation };
}

function drawAll({ laws, shotsPerTime, seed, purpose }: SimulatedRun, repeat: number): void {
  laws.forEach((law, k) => drawShots(law, shotsPerTime[k], createRandomStream(seed, purpose, k, repeat)));
}

function made<Plan extends object>(plan: Plan | StudyRefusal): Plan {
  if (isStudyRefusal(plan)) throw new Error(plan.message);
  return plan;
}

function timed<Result>(name: string, times: number, work: (round: number) => Result): Result {
  const spent: number[] = [];
  let result = work(0);
  for (let round = 0; round < times; round++) {
    const start = performance.now();
    result = work(round);
    spent.push(performance.now() - start);
  }
  console.log(`${name.padEnd(44)}${median(spent).toFixed(0).padStart(8)}`);
  return result;
}
