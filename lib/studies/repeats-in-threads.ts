import type { RepeatsMessage } from "@/lib/analyses/thread-task";
import type { JobContext } from "@/lib/jobs/job-context";

const BATCHES = 50;
const PLANNING_SHARE = 0.05;

/**
 * Returns the repeats 0 … `repeats` − 1 of a study in order. A repeat depends on its number alone, so that any number of threads
 * gives the same. `task` is the name of a thread task that takes a RepeatsMessage.
 */
export async function repeatsInThreads<Plan, Repeat>(task: string, plan: Plan, repeats: number, { pool, signal, progress }: Pick<JobContext, "pool" | "signal" | "progress">): Promise<Repeat[]> {
  const size = Math.max(1, Math.ceil(repeats / BATCHES));
  const results: Repeat[] = [];
  const underWay = new Set<Promise<void>>();
  let done = 0;
  for (let first = 0; first < repeats; first += size) {
    signal.throwIfAborted();
    const message: RepeatsMessage<Plan> = { plan, first, count: Math.min(size, repeats - first) };
    const running: Promise<void> = pool
      .run(message, { name: task, signal })
      .then((batch: Repeat[]) => {
        batch.forEach((repeat, at) => (results[first + at] = repeat));
        done += batch.length;
        progress(`simulated runs: ${done} of ${repeats}`, PLANNING_SHARE + ((1 - PLANNING_SHARE) * done) / repeats);
      })
      .finally(() => underWay.delete(running));
    running.catch(() => undefined);
    underWay.add(running);
    if (underWay.size > pool.options.maxThreads) await Promise.race(underWay);
  }
  await Promise.all(underWay);
  return results;
}
