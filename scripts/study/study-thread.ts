import { parentPort } from "node:worker_threads";
import { runStudyTask, type StudyTask } from "@/scripts/study/study-task";

parentPort?.on("message", ({ number, task }: { number: number; task: StudyTask }) => {
  parentPort?.postMessage({ number, result: runStudyTask(task) });
});
