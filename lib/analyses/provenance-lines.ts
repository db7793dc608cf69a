import { csvComment } from "@/lib/formats/csv-cell";
import type { AnalysisRow } from "./find-analysis";

/** Returns what an analysis depends on, one `name: value` a line, for the head of every export. */
export function provenanceLines({ analysis, runTitle, createdByName }: AnalysisRow): string[] {
  const { parameters, provenance } = analysis;
  const { front, bootstrap, traces } = parameters;
  return [
    `program: Strandline ${provenance.programVersion}`,
    `run: ${oneLine(runTitle)} (${analysis.runId}, version ${provenance.runVersion})`,
    `analysis: ${analysis.number} (${analysis.id}) by ${oneLine(createdByName)}, ${analysis.createdAt.toISOString()}`,
    ...provenance.archives.map((archive) => `archive: ${oneLine(archive.filename)} role ${archive.role} sha256 ${archive.sha256}`),
    `detection: ${provenance.detectionNumber} (${analysis.detectionId}); bright is ${provenance.brightIs}`,
    `spins: ${parameters.reading === "threshold" ? "by thresholds" : "by the fitted count distributions, without thresholds"}`,
    `estimator: ${parameters.estimator}; readout correction: ${parameters.readoutCorrection ? "yes" : "no"}`,
    `bootstrap: ${bootstrap.replicates} replicates, seed ${bootstrap.seed}, 95 % ${bootstrap.interval} intervals${bootstrap.blockLength > 1 ? `, blocks of ${bootstrap.blockLength} consecutive shots` : ""}`,
    `traces: ${traces.kind === "reference" ? `reference site ${traces.site}` : `by distance${traces.bulk ? ` within sites ${traces.bulk.join(" ")}` : ""}`}`,
    `front: ${front.rule} level ${front.level}, method ${front.method}, hold ${front.hold}, min signal ${front.minSignal}, ${front.absolute ? "absolute" : "oriented"} signal${front.throughOrigin ? ", line through the origin" : ""}, power law fitted in ${front.powerLawIn === "time" ? "time" : "log time"}${front.covariance === "bootstrap" ? ", joint covariance of the crossing times" : ""}`,
  ];
}

/** Returns the lines as the commented head of a CSV file. */
export function csvHead(row: AnalysisRow): string {
  return provenanceLines(row)
    .map((line) => `${csvComment(line)}\n`)
    .join("");
}

function oneLine(text: string): string {
  return text.replace(/\s+/g, " ").trim();
}
