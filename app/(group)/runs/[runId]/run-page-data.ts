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
  jobs: ShownJob[];
}

const ID = /^[0-9a-f]{24}$/;

/** Returns what the pages of a run share, read once a request; a run of another group is not found. */
export const runPageData = cache(async (runId: string): Promise<RunPageData> => {
  const actor = await requireActor();
  if (!ID.test(runId)) notFound();
  const run = found(await getRun(actor, runId));
  const [detections, analyses, jobs] = await Promise.all([listDetections(actor, runId, { limit: 200 }), listAnalyses(actor, runId), listRunJobs(actor, runId)]);
  return { actor, run, detections: found(detections).items, analyses: found(analyses), jobs: found(jobs) };
});

function found<T>(answer: T | Problem): T {
  if (isProblem(answer)) notFound();
  return answer;
}
