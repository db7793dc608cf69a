import "server-only";
import { notFound } from "next/navigation";
import { cache } from "react";
import { requireActor } from "@/lib/accounts/current-actor";
import type { Actor } from "@/lib/accounts/policy";
import { listAnalyses } from "@/lib/analyses/list-analyses";
import type { ShownAnalysis } from "@/lib/analyses/show-analysis";
import { listDetections } from "@/lib/detections/list-detections";
import type { ShownDetection } from "@/lib/detections/show-detection";
import { listRunJobs } from "@/lib/jobs/get-job";
import type { ShownJob } from "@/lib/jobs/show-job";
import { isProblem, type Problem } from "@/lib/problem";
import { getRun } from "@/lib/runs/get-run";
import type { ShownRun } from "@/lib/runs/show-run";

export interface RunPageData {
  actor: Actor;
  run: ShownRun;
  /** Newest first. */
  detections: ShownDetection[];
  analyses: ShownAnalysis[];
  /** Jobs of the run that wait or run. */
  active: ShownJob[];
}

const ID = /^[0-9a-f]{24}$/;

/** Returns what the pages of a run share, read once a request; a run of another group is not found. */
export const runPageData = cache(async (runId: string): Promise<RunPageData> => {
  const actor = await requireActor();
  if (!ID.test(runId)) notFound();
  // Jobs first: one that ends in between is still followed, and the page read anew at its end; the other way round, it would show what came before.
  const jobs = await listRunJobs(actor, runId);
  const [run, detections, analyses] = await Promise.all([getRun(actor, runId), listDetections(actor, runId, { limit: 200 }), listAnalyses(actor, runId)]);
  return { actor, run: found(run), detections: found(detections).items, analyses: found(analyses), active: found(jobs).filter(isUnderWay) };
});

function isUnderWay({ state }: ShownJob): boolean {
  return state === "queued" || state === "running";
}

function found<T>(answer: T | Problem): T {
  if (isProblem(answer)) notFound();
  return answer;
}
