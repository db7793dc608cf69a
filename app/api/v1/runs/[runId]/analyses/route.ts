import { createAnalysisEndpoint, listAnalysesEndpoint } from "@/lib/analyses/analysis-endpoints";
import { createAnalysis } from "@/lib/analyses/create-analysis";
import { listAnalyses } from "@/lib/analyses/list-analyses";
import { accepted, json } from "@/lib/http/answers";
import { serve } from "@/lib/http/serve";
import { isProblem } from "@/lib/problem";
import { absentRun } from "@/lib/runs/find-run";

export const POST = serve(
  createAnalysisEndpoint,
  async ({ actor, params, body }) => {
    const started = await createAnalysis(actor, params.runId, body);
    return isProblem(started) ? started : accepted(started);
  },
  absentRun,
);

export const GET = serve(listAnalysesEndpoint, async ({ actor, params }) => {
  const items = await listAnalyses(actor, params.runId);
  return isProblem(items) ? items : json({ items, nextCursor: null });
});
