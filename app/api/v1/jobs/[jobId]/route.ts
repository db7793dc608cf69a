import { json } from "@/lib/http/answers";
import { serve } from "@/lib/http/serve";
import { cancelJob } from "@/lib/jobs/cancel-job";
import { getJob } from "@/lib/jobs/get-job";
import { cancelJobEndpoint, getJobEndpoint } from "@/lib/jobs/job-endpoints";
import { isProblem } from "@/lib/problem";

export const GET = serve(getJobEndpoint, async ({ actor, params }) => {
  const job = await getJob(actor, params.jobId);
  return isProblem(job) ? job : json(job);
});

export const DELETE = serve(cancelJobEndpoint, async ({ actor, params }) => {
  const job = await cancelJob(actor, params.jobId);
  return isProblem(job) ? job : json(job);
});
