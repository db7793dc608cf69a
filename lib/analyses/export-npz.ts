import { writeNpz } from "@/lib/formats/write-npz";
import type { Correlators, Numbers } from "./read-results";

/** Returns all pairs as NPZ; NaN where there is no number. Layouts as in the JSON answer. */
export function correlatorsNpz(correlators: Correlators): Uint8Array {
  const matrix = (rows: Numbers[]) => ({ shape: [rows.length, rows[0]?.length ?? 0], values: Float64Array.from(rows.flat(), (value) => value ?? Number.NaN) });
  return writeNpz({
    times_us: { shape: [correlators.times_us.length], values: Float64Array.from(correlators.times_us) },
    pairs: { shape: [correlators.pairs.length, 2], values: Int32Array.from(correlators.pairs.flat()) },
    mean: matrix(correlators.mean),
    mean_error: matrix(correlators.meanError),
    value: matrix(correlators.value),
    error: matrix(correlators.error),
    low: matrix(correlators.low),
    high: matrix(correlators.high),
    ...(correlators.pValue && { p_value: matrix(correlators.pValue) }),
  });
}
