import { correlatorsEndpoint } from "@/lib/analyses/analysis-endpoints";
import { correlatorsCsv } from "@/lib/analyses/export-csv";
import { correlatorsNpz } from "@/lib/analyses/export-npz";
import { fileAnswer } from "@/lib/analyses/file-answer";
import { findFinishedAnalysis } from "@/lib/analyses/find-analysis";
import { readCorrelators } from "@/lib/analyses/read-results";
import { json } from "@/lib/http/answers";
import { serve } from "@/lib/http/serve";
import { isProblem } from "@/lib/problem";

export const GET = serve(correlatorsEndpoint, async ({ actor, params, query }) => {
  const row = await findFinishedAnalysis(actor, params.analysisId);
  if (isProblem(row)) return row;
  const correlators = await readCorrelators(row, query.time_index);
  if (isProblem(correlators)) return correlators;
  const name = `correlators-${row.analysis.number}`;
  if (query.format === "csv") return fileAnswer(correlatorsCsv(row, correlators), "text/csv; charset=utf-8", `${name}.csv`);
  if (query.format === "npz") return fileAnswer(correlatorsNpz(correlators), "application/octet-stream", `${name}.npz`);
  return json(correlators);
});
