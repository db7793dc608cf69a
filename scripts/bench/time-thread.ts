import { parentPort } from "node:worker_threads";
import { benchTime, type BenchTask } from "@/scripts/bench/bench-time";

parentPort?.on("message", (task: BenchTask) => {
  const answer = benchTime(task);
  parentPort?.postMessage(answer);
});
