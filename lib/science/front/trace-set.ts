/** Traces with their joint bootstrap, as the front needs them; all from one analysis. */
export interface TraceSet {
  labels: string[];
  /** `[trace]`, in units of the mean spacing. */
  distances: Float64Array;
  /** `[k]`, µs, strictly increasing. */
  times_us: Float64Array;
  /** `[k]`, kept shots M_k. */
  shotsPerTime: Float64Array;
  /** `[trace][k]` */
  value: Float64Array;
  /** `[trace][k]`, bootstrap standard errors. */
  error: Float64Array;
  replicateCount: number;
  /** `[k][trace][replicate]` */
  replicates: Float64Array;
}
