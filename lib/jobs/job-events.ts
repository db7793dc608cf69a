import "server-only";
import { setTimeout as sleep } from "node:timers/promises";
import type { Actor } from "@/lib/accounts/policy";
import { isProblem, type Problem } from "@/lib/problem";
import { getJob } from "./get-job";
import { isFinalState } from "./show-job";

const POLL_MS = 250;
const KEEP_ALIVE_MS = 15_000;

/** Answers a job's server-sent events: `progress` with the job whenever it changes, to its final state. */
export async function jobEvents(actor: Actor, jobId: string, clientLeaves: AbortSignal): Promise<Response | Problem> {
  const first = await getJob(actor, jobId);
  if (isProblem(first)) return first;
  const gone = new AbortController();
  const encoder = new TextEncoder();
  clientLeaves.addEventListener("abort", () => gone.abort(), { once: true });
  const stream = new ReadableStream<Uint8Array>({
    async start(controller) {
      let said = "";
      let saidAt = Date.now();
      while (!gone.signal.aborted) {
        const job = await getJob(actor, jobId).catch(() => null);
        if (job && isProblem(job)) break;
        const text = JSON.stringify(job);
        if (job && text !== said) {
          controller.enqueue(encoder.encode(`event: progress\ndata: ${text}\n\n`));
          said = text;
          saidAt = Date.now();
          if (isFinalState(job.state)) break;
        } else if (Date.now() - saidAt > KEEP_ALIVE_MS) {
          controller.enqueue(encoder.encode(": still here\n\n"));
          saidAt = Date.now();
        }
        await sleep(POLL_MS, undefined, { signal: gone.signal }).catch(() => undefined);
      }
      if (!gone.signal.aborted) controller.close();
    },
    cancel: () => gone.abort(),
  });
  return new Response(stream, { headers: { "content-type": "text/event-stream; charset=utf-8", "cache-control": "no-cache, no-transform" } });
}
