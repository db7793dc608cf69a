import { fileAnswer } from "@/lib/analyses/file-answer";
import { json } from "@/lib/http/answers";
import { serve } from "@/lib/http/serve";
import { isProblem } from "@/lib/problem";
import { exportStudy } from "@/lib/studies/export-study";
import { findStudy } from "@/lib/studies/find-study";
import { getStudy } from "@/lib/studies/get-study";
import { getStudyEndpoint } from "@/lib/studies/study-endpoints";

export const GET = serve(getStudyEndpoint, async ({ actor, params, query }) => {
  const row = await findStudy(actor, params.studyId);
  if (isProblem(row)) return row;
  if (query.format === "json") return json(await getStudy(actor, row));
  const file = await exportStudy(actor, row);
  return isProblem(file) ? file : fileAnswer(file.text, "text/csv; charset=utf-8", file.filename);
});
