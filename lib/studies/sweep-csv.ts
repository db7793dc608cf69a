import type { AnalysisRow } from "@/lib/analyses/find-analysis";
import { csvHead } from "@/lib/analyses/provenance-lines";
import { csvComment, csvNumber, csvText } from "@/lib/formats/csv-cell";
import type { SweepCombination, SweepResult, SweptNumber } from "@/lib/science/studies/sweep-result";

const COLUMNS =
  "threshold_shift,level,traces,method,hold,readout_correction,first_times_left_out,last_times_left_out,points,gamma,gamma_error,beta,beta_error,v_sites_per_ms,v_error,reason";

/** Returns the combinations of a sweep as CSV, the analysis' own first, with the sentence in the head. */
export function sweepCsv(row: AnalysisRow, { combinations, sentence, notes }: SweepResult): string {
  const head = [sentence, ...notes].map((line) => `${csvComment(line)}\n`).join("");
  return `${csvHead(row)}${head}${COLUMNS}\n${combinations.map((combination) => `${combinationCells(combination)}\n`).join("")}`;
}

function combinationCells({ choices, points, gamma, beta, v_sites_per_ms, reason }: SweepCombination): string {
  const { thresholdShift, level, traces, method, hold, readoutCorrection, firstLeftOut, lastLeftOut } = choices;
  return [
    csvNumber(thresholdShift),
    csvNumber(level),
    csvText(traces.kind === "distance" ? "by distance" : `reference site ${traces.site}`),
    csvText(method),
    // Another method has no use for it.
    method === "first" ? csvNumber(hold) : "",
    csvNumber(Number(readoutCorrection)),
    csvNumber(firstLeftOut),
    csvNumber(lastLeftOut),
    csvNumber(points),
    ...[gamma, beta, v_sites_per_ms].flatMap(numberCells),
    csvText(reason ?? ""),
  ].join(",");
}

function numberCells(number: SweptNumber | null): string[] {
  return [csvNumber(number?.value ?? null), csvNumber(number?.error ?? null)];
}
