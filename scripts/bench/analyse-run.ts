/**
 * The timed job: NPZ → thresholds → correlators and joint bootstrap of all pairs → crossings and fits of the reference
 * traces in every replicate. Arguments: file, threads, repeats. Prints one line of JSON.
 */
import { Worker } from "node:worker_threads";
import { collectTraces } from "@/lib/science/correlators/collect-traces";
import { planReferenceTraces } from "@/lib/science/correlators/trace-plan";
import { analyseFront } from "@/lib/science/front/analyse-front";
import { DEFAULT_FRONT_RULE } from "@/lib/science/front/front-rule";
import { benchTime, type BenchAnswer, type BenchTask } from "@/scripts/bench/bench-time";
import { readSurrogateRun } from "@/scripts/bench/npz-counts";

const REPLICATES = 1000;

type Stages = Record<"load" | "threshold" | "bootstrap" | "both, wall" | "crossings and fits" | "total", number>;

async function main(path: string, threads: number, repeats: number): Promise<void> {
  const workers = Array.from({ length: threads === 1 ? 0 : threads }, () => {
    return new Worker(new URL("./time-thread.mjs", import.meta.url));
  });
  const runs: Stages[] = [];
  let gamma: unknown = null;
  for (let n = 0; n < repeats; n++) {
    const { stages, front } = await timedJob(path, workers);
    runs.push(stages);
    gamma = front.powerLaw !== null && "gamma" in front.powerLaw ? front.powerLaw.gamma : front.powerLaw;
  }
  await Promise.all(workers.map((worker) => worker.terminate()));
  const peakRss_MiB = Math.round(process.resourceUsage().maxRSS / 1024);
  process.stdout.write(`${JSON.stringify({ threads, runs, peakRss_MiB, gamma })}\n`);
}

async function timedJob(path: string, workers: readonly Worker[]) {
  const start = performance.now();
  const run = readSurrogateRun(path);
  const loaded = performance.now();
  const plan = planReferenceTraces({ x: Float64Array.from({ length: run.sites }, (_, i) => i), y: null }, 0);
  const { counts, shots, sites } = run;
  const tasks = Array.from(run.times_us, (_, timeIndex): BenchTask => {
    return { counts, shots, sites, timeIndex, replicates: REPLICATES, plan };
  });
  const answers = workers.length === 0 ? tasks.map(benchTime) : await inThreads(workers, tasks);
  const analysed = performance.now();
  const results = answers.map(({ result }) => result);
  const traces = collectTraces(plan, run.times_us, results, REPLICATES);
  const { front } = analyseFront(traces, { ...DEFAULT_FRONT_RULE, method: "first" });
  const end = performance.now();
  const stages: Stages = {
    load: loaded - start,
    threshold: sum(answers.map((answer) => answer.threshold_ms)),
    bootstrap: sum(answers.map((answer) => answer.bootstrap_ms)),
    "both, wall": analysed - loaded,
    "crossings and fits": end - analysed,
    total: end - start,
  };
  return { stages, front };
}

/** Hands each thread the next evolution time as soon as it is free. */
async function inThreads(workers: readonly Worker[], tasks: readonly BenchTask[]): Promise<BenchAnswer[]> {
  const answers: BenchAnswer[] = [];
  let next = 0;
  await Promise.all(
    workers.map(async (worker) => {
      while (next < tasks.length) {
        const task = tasks[next++];
        answers.push(
          await new Promise<BenchAnswer>((resolve, reject) => {
            worker.once("error", reject);
            worker.once("message", (answer: BenchAnswer) => {
              worker.off("error", reject);
              resolve(answer);
            });
            worker.postMessage(task);
          }),
        );
      }
    }),
  );
  return answers;
}

function sum(values: readonly number[]): number {
  return values.reduce((total, value) => total + value, 0);
}

await main(process.argv[2], Number(process.argv[3]), Number(process.argv[4]));
