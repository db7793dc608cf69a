import "server-only";
import type { Database } from "@/db/connection";
import { readArray, readJson } from "./result-arrays";
import type { StoredPlan } from "./store-results";

const MOST_ROWS = 20;
const MOST_COLUMNS = 40;

export interface Thumbnail {
  /** `[row][column]` from the foot upwards, three decimals. */
  cells: (number | null)[][];
  limit: number;
}

/** Returns a map thinned to at most 20 rows and 40 columns; null when the analysis has no traces. */
export async function thumbnailOf(database: Database, analysisId: string): Promise<Thumbnail | null> {
  const plan = await readJson<StoredPlan>(database, analysisId, "plan");
  const values = await readArray(database, analysisId, "traceValue");
  const traces = plan.labels.length;
  const times = values.length / traces;
  if (!(times > 0)) return null;
  const rows = picks(traces, MOST_ROWS);
  const columns = picks(times, MOST_COLUMNS);
  const cells = rows.map((row) => columns.map((column) => rounded(values[row * times + column])));
  const limit = Math.max(0.01, ...cells.flat().map((value) => Math.abs(value ?? 0)));
  return { cells, limit };
}

function picks(count: number, most: number): number[] {
  const shown = Math.min(count, most);
  return Array.from({ length: shown }, (_, q) => Math.floor(((q + 0.5) * count) / shown));
}

function rounded(value: number): number | null {
  return Number.isFinite(value) ? Math.round(value * 1000) / 1000 : null;
}
