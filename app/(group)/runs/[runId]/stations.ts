import type { Station } from "@/components/stations/station-strip";
import { groupedCount, withUncertainty } from "@/lib/number-text";
import type { ShownAnalysis } from "@/lib/analyses/show-analysis";
import type { RunPageData } from "./run-page-data";

/** Returns the four stations with their key figures, and whether each is up to date. */
export function stationsOf({ run, detections, analyses, active }: RunPageData): Station[] {
  const kept = run.shotsPerTime.reduce((sum, shots) => sum + shots, 0);
  const aside = Object.values(run.shotsSetAside).reduce((sum, shots) => sum + shots, 0);
  const detection = detections[0];
  const analysis = analyses.find(({ state }) => state === "done");
  const fidelities = (detection?.fidelity ?? []).filter((fidelity) => fidelity !== null);
  const mean = fidelities.reduce((sum, fidelity) => sum + fidelity, 0) / fidelities.length;
  const analysisStale = analysis !== undefined && (analysis.stale || analysis.provenance.detectionId !== detection?.id);
  const underWay = (kind: "ingest" | "analysis") => active.some((job) => job.kind === kind);
  const analysisNext = underWay("analysis") ? "under way" : kept > 0 && detection ? "start an analysis" : "after a detection";
  return [
    {
      segment: "shots",
      name: "Shots",
      figure: kept > 0 ? `${groupedCount(kept)} kept` : "none yet",
      note: kept > 0 ? (aside > 0 ? `${groupedCount(aside)} set aside` : "none set aside") : underWay("ingest") ? "being read" : run.status === "failed" ? "archive refused" : "add an archive",
      state: kept > 0 ? "current" : "missing",
    },
    {
      segment: "detection",
      name: "Detection",
      figure: detection ? (fidelities.length > 0 ? `fidelity ${(100 * mean).toFixed(2)} %` : "no error rates") : "no thresholds",
      note: detection ? `detection ${detection.number}, ${detection.method}` : kept > 0 ? "save a detection" : "after the shots",
      state: detection ? (detection.stale ? "outdated" : "current") : "missing",
    },
    {
      segment: "correlations",
      name: "Correlations",
      figure: analysis ? `${groupedCount((run.sites * (run.sites - 1)) / 2)} pairs` : "not computed",
      note: analysis ? `analysis ${analysis.number}, B = ${analysis.parameters.bootstrap.replicates}` : analysisNext,
      state: analysis ? (analysisStale ? "outdated" : "current") : "missing",
    },
    {
      segment: "front",
      name: "Front",
      figure: analysis ? betaText(analysis) : "not fitted",
      note: analysis?.summary ? analysis.summary.verdict : analysisNext,
      state: analysis ? (analysisStale ? "outdated" : "current") : "missing",
    },
  ];
}

function betaText({ summary }: ShownAnalysis): string {
  const beta = summary?.beta;
  return beta ? `β = ${withUncertainty(beta.value, beta.error)}` : "no fit";
}
