import { json } from "@/lib/http/answers";
import { serve } from "@/lib/http/serve";
import { isProblem } from "@/lib/problem";
import { getHistograms } from "@/lib/runs/get-histograms";
import { histogramsEndpoint } from "@/lib/runs/run-endpoints";

export const GET = serve(histogramsEndpoint, async ({ actor, params, query }) => {
  const histograms = await getHistograms(actor, params.runId, query);
  return isProblem(histograms) ? histograms : json(histograms);
});
