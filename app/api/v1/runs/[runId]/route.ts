import { json, noContent } from "@/lib/http/answers";
import { serve } from "@/lib/http/serve";
import { isProblem } from "@/lib/problem";
import { deleteRun } from "@/lib/runs/delete-run";
import { absentRun } from "@/lib/runs/find-run";
import { getRun } from "@/lib/runs/get-run";
import { deleteRunEndpoint, getRunEndpoint, updateRunEndpoint } from "@/lib/runs/run-endpoints";
import { updateRun } from "@/lib/runs/update-run";

export const GET = serve(getRunEndpoint, async ({ actor, params }) => {
  const run = await getRun(actor, params.runId);
  return isProblem(run) ? run : json(run);
});

export const PATCH = serve(
  updateRunEndpoint,
  async ({ actor, params, body }) => {
    const run = await updateRun(actor, params.runId, body);
    return isProblem(run) ? run : json(run);
  },
  absentRun,
);

export const DELETE = serve(deleteRunEndpoint, async ({ actor, params }) => (await deleteRun(actor, params.runId)) ?? noContent());
