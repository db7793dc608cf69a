import { tracesEndpoint } from "@/lib/analyses/analysis-endpoints";
import { tracesCsv } from "@/lib/analyses/export-csv";
import { fileAnswer } from "@/lib/analyses/file-answer";
import { findFinishedAnalysis } from "@/lib/analyses/find-analysis";
import { readDistanceTraces, readReferenceTraces, readTraces } from "@/lib/analyses/read-results";
import { json } from "@/lib/http/answers";
import { serve } from "@/lib/http/serve";
import { isProblem } from "@/lib/problem";

export const GET = serve(tracesEndpoint, async ({ actor, params, query }) => {
  const row = await findFinishedAnalysis(actor, params.analysisId);
  if (isProblem(row)) return row;
  const traces =
    query.kind === "distance" ? await readDistanceTraces(row) : query.reference === undefined ? await readTraces(row) : await readReferenceTraces(row, query.reference);
  if (isProblem(traces)) return traces;
  if (query.format === "csv") return fileAnswer(tracesCsv(row, traces), "text/csv; charset=utf-8", `traces-${row.analysis.number}.csv`);
  return json(traces);
});
