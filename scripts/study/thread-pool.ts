import { Worker } from "node:worker_threads";
import type { StudyTask, runStudyTask } from "@/scripts/study/study-task";

type StudyAnswer = ReturnType<typeof runStudyTask>;

/** Returns the results of the tasks in their order, made by `threads` threads that run the bundled file `script`. */
export async function runOnThreads(script: URL, threads: number, tasks: readonly StudyTask[]): Promise<StudyAnswer[]> {
  const results = new Array<StudyAnswer>(tasks.length);
  let next = 0;
  await Promise.all(Array.from({ length: Math.min(threads, tasks.length) }, workOff));
  return results;

  function workOff(): Promise<void> {
    return new Promise((resolve, reject) => {
      const worker = new Worker(script);
      const giveNext = () => {
        const number = next++;
        if (number < tasks.length) worker.postMessage({ number, task: tasks[number] });
        else worker.terminate().then(() => resolve(), reject);
      };
      worker.on("error", reject);
      worker.on("message", ({ number, result }: { number: number; result: StudyAnswer }) => {
        results[number] = result;
        giveNext();
      });
      giveNext();
    });
  }
}
