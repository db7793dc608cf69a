import { frontEndpoint } from "@/lib/analyses/analysis-endpoints";
import { frontCsv } from "@/lib/analyses/export-csv";
import { fileAnswer } from "@/lib/analyses/file-answer";
import { findFinishedAnalysis } from "@/lib/analyses/find-analysis";
import { readFront } from "@/lib/analyses/read-results";
import { json } from "@/lib/http/answers";
import { serve } from "@/lib/http/serve";
import { isProblem } from "@/lib/problem";

export const GET = serve(frontEndpoint, async ({ actor, params, query }) => {
  const row = await findFinishedAnalysis(actor, params.analysisId);
  if (isProblem(row)) return row;
  const front = await readFront(row);
  if (query.format === "csv") return fileAnswer(frontCsv(row, front), "text/csv; charset=utf-8", `front-${row.analysis.number}.csv`);
  return json(front);
});
