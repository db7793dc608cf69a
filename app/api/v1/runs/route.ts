import { created, json } from "@/lib/http/answers";
import { serve } from "@/lib/http/serve";
import { isProblem } from "@/lib/problem";
import { createRun } from "@/lib/runs/create-run";
import { listRuns } from "@/lib/runs/list-runs";
import { createRunEndpoint, listRunsEndpoint } from "@/lib/runs/run-endpoints";

export const POST = serve(createRunEndpoint, async ({ actor, body }) => {
  const run = await createRun(actor, body);
  return isProblem(run) ? run : created(run);
});

export const GET = serve(listRunsEndpoint, async ({ actor, query }) => {
  const page = await listRuns(actor, query);
  return isProblem(page) ? page : json(page);
});
