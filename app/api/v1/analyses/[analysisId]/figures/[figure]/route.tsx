import { FILE_THEMES } from "@/components/charts/chart-theme";
import { AnalysisFigure, type FigureName } from "@/components/figures/analysis-figure";
import { figureEndpoint } from "@/lib/analyses/analysis-endpoints";
import { fileAnswer } from "@/lib/analyses/file-answer";
import { findFinishedAnalysis } from "@/lib/analyses/find-analysis";
import { provenanceLines } from "@/lib/analyses/provenance-lines";
import { readFront, readTraces } from "@/lib/analyses/read-results";
import { readSiteHistograms } from "@/lib/analyses/read-site-histograms";
import { serve } from "@/lib/http/serve";
import { isProblem } from "@/lib/problem";

export const GET = serve(figureEndpoint, async ({ actor, params, query }) => {
  const row = await findFinishedAnalysis(actor, params.analysisId);
  if (isProblem(row)) return row;
  const name = params.figure.replace(/\.svg$/, "") as FigureName;
  // Next refuses a static import of the renderer in its own bundles.
  const { renderToStaticMarkup } = await import("react-dom/server");
  const svg = renderToStaticMarkup(
    <AnalysisFigure
      name={name}
      width_mm={query.width_mm}
      theme={FILE_THEMES[query.theme]}
      runTitle={row.runTitle}
      siteNames={row.siteNames}
      traces={await readTraces(row)}
      front={await readFront(row)}
      histograms={name === "histograms" ? await readSiteHistograms(row) : []}
      provenance={provenanceLines(row)}
    />,
  );
  return fileAnswer(`<?xml version="1.0" encoding="UTF-8"?>\n${svg}\n`, "image/svg+xml; charset=utf-8", `${name}-${row.analysis.number}.svg`);
});
