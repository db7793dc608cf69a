import { setTimeout as sleep } from "node:timers/promises";
import { describe, expect, it } from "vitest";
import type { JobContext } from "@/lib/jobs/job-context";
import { repeatsInThreads } from "@/lib/studies/repeats-in-threads";

interface Batch {
  plan: number;
  first: number;
  count: number;
}

/** A pool whose batches come back in another order than they were sent; counts how many are under way at once. */
function slowPool(maxThreads: number) {
  const seen = { underWay: 0, most: 0 };
  const pool = {
    options: { maxThreads },
    run: async ({ plan, first, count }: Batch, { signal }: { signal: AbortSignal }) => {
      seen.underWay += 1;
      seen.most = Math.max(seen.most, seen.underWay);
      await sleep((first * 7) % 5, undefined, { signal }).finally(() => (seen.underWay -= 1));
      return Array.from({ length: count }, (_, at) => plan * 1000 + first + at);
    },
  };
  return { pool: pool as unknown as JobContext["pool"], seen };
}

describe("the repeats of a study", () => {
  it.each([1, 2, 7])("come in order and each once on %i threads", async (threads) => {
    const { pool, seen } = slowPool(threads);
    const fractions: number[] = [];
    const repeats = await repeatsInThreads<number, number>("task", 3, 123, { pool, signal: new AbortController().signal, progress: (_, fraction) => fractions.push(fraction) });
    expect(repeats).toEqual(Array.from({ length: 123 }, (_, repeat) => 3000 + repeat));
    expect(seen.most).toBeLessThanOrEqual(threads + 1);
    expect(fractions).toEqual(Array.from(fractions).sort((one, other) => one - other));
    expect(fractions.at(-1)).toBe(1);
  });

  it("end when the job is stopped", async () => {
    const { pool } = slowPool(2);
    const stop = new AbortController();
    const running = repeatsInThreads<number, number>("task", 1, 1000, { pool, signal: stop.signal, progress: () => stop.abort() });
    await expect(running).rejects.toThrow(/abort/i);
  });
});
