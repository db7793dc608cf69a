/**
 * Which pairs are averaged into each trace, as compressed rows:
 * trace q is the mean over `pairs[offsets[q]] … pairs[offsets[q + 1] − 1]` (indices into the pair list).
 */
export interface TracePlan {
  kind: "reference" | "distance";
  /** `[trace]`, short names such as "site 4" or "d = 1.41". */
  labels: string[];
  /** `[trace]`, in units of the mean spacing. */
  distances: Float64Array;
  /** `[trace + 1]` */
  offsets: Uint32Array;
  /** Pair indices, trace after trace. */
  pairs: Uint32Array;
}
