import { accepted, json } from "@/lib/http/answers";
import { serve } from "@/lib/http/serve";
import { isProblem } from "@/lib/problem";
import { createStudy } from "@/lib/studies/create-study";
import { absentAnalysis } from "@/lib/studies/find-subject";
import { listStudies } from "@/lib/studies/list-studies";
import { createStudyEndpoint, listStudiesEndpoint } from "@/lib/studies/study-endpoints";

export const POST = serve(
  createStudyEndpoint,
  async ({ actor, params, body }) => {
    const started = await createStudy(actor, params.analysisId, body);
    return isProblem(started) ? started : accepted(started);
  },
  absentAnalysis,
);

export const GET = serve(listStudiesEndpoint, async ({ actor, params }) => {
  const items = await listStudies(actor, params.analysisId);
  return isProblem(items) ? items : json({ items, nextCursor: null });
});
