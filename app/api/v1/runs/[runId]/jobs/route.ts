import { json } from "@/lib/http/answers";
import { serve } from "@/lib/http/serve";
import { listRunJobs } from "@/lib/jobs/get-job";
import { listRunJobsEndpoint } from "@/lib/jobs/job-endpoints";
import { isProblem } from "@/lib/problem";
import { getRun } from "@/lib/runs/get-run";

export const GET = serve(listRunJobsEndpoint, async ({ actor, params }) => {
  const run = await getRun(actor, params.runId);
  if (isProblem(run)) return run;
  const jobs = await listRunJobs(actor, params.runId);
  return isProblem(jobs) ? jobs : json({ items: jobs, nextCursor: null });
});
