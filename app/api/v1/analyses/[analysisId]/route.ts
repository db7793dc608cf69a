import { getAnalysisEndpoint } from "@/lib/analyses/analysis-endpoints";
import { findAnalysis } from "@/lib/analyses/find-analysis";
import { showAnalysis } from "@/lib/analyses/show-analysis";
import { json } from "@/lib/http/answers";
import { serve } from "@/lib/http/serve";
import { isProblem } from "@/lib/problem";

export const GET = serve(getAnalysisEndpoint, async ({ actor, params }) => {
  const row = await findAnalysis(actor, params.analysisId);
  return isProblem(row) ? row : json(showAnalysis(row));
});
