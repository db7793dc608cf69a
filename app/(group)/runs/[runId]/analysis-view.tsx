import "server-only";
import type { ReactNode } from "react";
import { AnalysisBar } from "@/components/stations/analysis-bar";
import { AnalysisForm } from "@/components/stations/analysis-form";
import { NotYet } from "@/components/stations/not-yet";
import { ProblemNotice } from "@/components/shell/problem-notice";
import { may } from "@/lib/accounts/policy";
import { findFinishedAnalysis, type AnalysisRow } from "@/lib/analyses/find-analysis";
import type { ShownAnalysis } from "@/lib/analyses/show-analysis";
import { isProblem } from "@/lib/problem";
import type { ShownDetection } from "@/lib/detections/show-detection";
import type { RunPageData } from "./run-page-data";

interface AnalysisViewProps {
  data: RunPageData;
  /** From `?analysis=`. */
  wish: string | string[] | undefined;
  /** Draws the station for a finished analysis. */
  children: (row: AnalysisRow) => Promise<ReactNode>;
}

/** A station that needs a finished analysis: chooses one, or says what to do until there is one. */
export async function AnalysisView({ data, wish, children }: AnalysisViewProps) {
  const { actor, run, detections, analyses, active } = data;
  if (run.version === 0) return <NotYet runId={run.id} missing="shots" />;
  if (detections.length === 0) return <NotYet runId={run.id} missing="detection" />;
  const finished = analyses.filter(({ state }) => state === "done");
  const choices = may(actor, "analysis.create") ? detections.map(detectionChoice) : null;
  const failed = analyses[0]?.state === "failed" ? analyses[0] : null;
  const failure = failed && <ProblemNotice title={`Analysis ${failed.number} was refused`} problem={failed.job.error} />;
  const chosen = finished.find(({ number }) => String(number) === wish) ?? finished[0];
  const row = chosen && (await findFinishedAnalysis(actor, chosen.id));
  if (!chosen || !row || isProblem(row)) {
    if (active.some(({ kind }) => kind === "analysis")) {
      return <p className="notice max-w-[70ch]">The first analysis is under way. Map and front appear here by themselves when it is done.</p>;
    }
    return (
      <div className="space-y-5">
        {failure}
        {choices ? (
          <>
            <p className="notice max-w-[70ch]">Nothing has been analysed yet. The defaults are those of the definitions: press “Analyse”, and the map and front follow.</p>
            <AnalysisForm runId={run.id} siteNames={run.siteNames} detections={choices} />
          </>
        ) : (
          <p className="notice">Nothing has been analysed yet. An analyst starts the first analysis.</p>
        )}
      </div>
    );
  }
  return (
    <>
      {failure}
      <AnalysisBar
        runId={run.id}
        siteNames={run.siteNames}
        analyses={finished.map(({ number, label, summary }) => ({ number, label, text: summary?.verdict ?? "" }))}
        shown={chosen.number}
        provenance={provenanceText(chosen)}
        detections={choices}
      />
      {chosen.stale && <p className="notice notice-warning mb-4">The run has newer shots than this analysis. Save a detection and analyse again.</p>}
      {await children(row)}
    </>
  );
}

function detectionChoice({ id, number, method, label, falseBright, falseDark }: ShownDetection) {
  return { id, number, method, label, hasRates: [...falseBright, ...falseDark].every((rate) => rate !== null) };
}

function provenanceText({ parameters, provenance, createdBy, createdAt }: ShownAnalysis): string {
  const { traces, bootstrap, front } = parameters;
  return [
    `detection ${provenance.detectionNumber}`,
    parameters.readoutCorrection ? "readout corrected" : "not corrected for readout",
    traces.kind === "reference" ? `reference site ${traces.site}` : "by distance",
    `${front.rule === "fraction-of-max" ? `${100 * front.level} % of the maximum` : `${front.rule} ${front.level}`}, ${front.method}`,
    `B = ${bootstrap.replicates}, seed ${bootstrap.seed}`,
    `${createdBy}, ${createdAt.slice(0, 10)}`,
  ].join("  ·  ");
}
