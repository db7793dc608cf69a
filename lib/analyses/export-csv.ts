import { csvNumber, csvText } from "@/lib/formats/csv-cell";
import type { FrontResult } from "@/lib/science/front/front-result";
import type { AnalysisRow } from "./find-analysis";
import { csvHead } from "./provenance-lines";
import type { Correlators, Traces } from "./read-results";

/** Returns all pairs as CSV, one row a time and pair. */
export function correlatorsCsv(row: AnalysisRow, correlators: Correlators): string {
  const lines = [`${csvHead(row)}time_us,site_i,site_j,value,error,low,high,few_flips,p_value,significant`];
  const names = correlators.siteNames.map(csvText);
  correlators.times_us.forEach((time, k) =>
    correlators.pairs.forEach(([i, j], pair) => {
      const numbers = [correlators.value, correlators.error, correlators.low, correlators.high].map((array) => csvNumber(array[k][pair]));
      lines.push(`${time},${names[i]},${names[j]},${numbers.join(",")},${Number(correlators.fewFlips[k][pair])},${csvNumber(correlators.pValue?.[k][pair] ?? null)},${mark(correlators.significant?.[k][pair])}`);
    }),
  );
  return `${lines.join("\n")}\n`;
}

/** Returns the map as CSV, one row a trace and time. */
export function tracesCsv(row: AnalysisRow, traces: Traces): string {
  const lines = [`${csvHead(row)}trace,distance,time_us,value,error,low,high,few_flips,band_low,band_high,significant`];
  traces.labels.forEach((label, trace) =>
    traces.times_us.forEach((time, k) => {
      const numbers = [traces.value, traces.error, traces.low, traces.high].map((array) => csvNumber(array[trace][k]));
      lines.push(`${csvText(label)},${traces.distances[trace]},${time},${numbers.join(",")},${Number(traces.fewFlips[trace][k])},${csvNumber(traces.bandLow?.[trace][k] ?? null)},${csvNumber(traces.bandHigh?.[trace][k] ?? null)},${mark(traces.significant?.[trace][k])}`);
    }),
  );
  return `${lines.join("\n")}\n`;
}

/** 1, 0, or nothing where it is not known. */
function mark(flag: boolean | undefined): string {
  return flag === undefined ? "" : String(Number(flag));
}

/** Returns the front as CSV: the points, with fits and verdict in the head. */
export function frontCsv(row: AnalysisRow, front: FrontResult): string {
  const warnings = front.warnings.map((warning) => `# warning: ${warning}`);
  const fits = [`# verdict: ${front.verdict}`, ...fitLines("linear", front.linear), ...fitLines("power law", front.powerLaw), ...warnings].join("\n");
  const lines = [`${csvHead(row)}${fits}\nlabel,distance,time_us,error_us,low_us,high_us,status,failed_share,fitted,warnings`];
  for (const point of front.points) {
    const numbers = [point.time_us, point.error_us, point.low_us, point.high_us].map(csvNumber);
    lines.push(`${csvText(point.label)},${point.distance},${numbers.join(",")},${point.status},${csvNumber(point.failedShare)},${Number(point.fitted)},${point.warnings.join(" ")}`);
  }
  return `${lines.join("\n")}\n`;
}

function fitLines(name: string, fit: FrontResult["linear"] | FrontResult["powerLaw"]): string[] {
  if ("reason" in fit) return [`# ${name}: ${fit.reason}`];
  const parameters = Object.entries(fit).flatMap(([key, value]) =>
    typeof value === "object" && value !== null && "fitError" in value ? [`${key} ${value.value} error ${value.error} low ${value.low} high ${value.high}`] : [],
  );
  return [`# ${name}: ${parameters.join("; ")}; chi2 ${fit.chi2} dof ${fit.dof} p ${fit.pValue} aicc ${fit.aicc} bic ${fit.bic}`];
}
