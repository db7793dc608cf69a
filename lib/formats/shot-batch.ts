import type { Problem } from "@/lib/problem";

export type ArchiveRole = "shots" | "calibration-dark" | "calibration-bright";

/** Some shots of one role in file order, times mixed as they come. */
export interface ShotBatch {
  role: ArchiveRole;
  shots: number;
  sites: number;
  /** `[shot]`, µs; NaN for calibration shots. */
  times_us: Float64Array;
  /** `[shot]`, the number the file gives, or the position within its time. */
  shotNumbers: Float64Array;
  /** `[shot][site]`; uint16 for whole counts, float32 once the file has shown fractions. Missing counts read 0 (uint16) or NaN (float32). */
  counts: Uint16Array | Float32Array;
  /** `[shot]`, 1 where at least one count is missing: the shot is to be set aside. */
  missing: Uint8Array;
}

/** What a reader knows of the whole file once it has read it. */
export interface ReadSummary {
  format: ShotFormat;
  siteNames: string[];
  /** `[site][x]` or `[site][x, y]` in units of the mean spacing, when the file states them. */
  positions: number[][] | null;
}

export type ShotFormat = "csv-shots" | "csv-counts" | "npy" | "npz";

/** Bytes with random access and in order; the owner counts what is read for progress. */
export interface ByteSource {
  size: number;
  /** Returns exactly `length` bytes from `offset`, fewer only at the end. */
  read(offset: number, length: number): Promise<Uint8Array>;
  /** All bytes in order, in chunks of any size. */
  stream(): AsyncIterable<Uint8Array>;
}

export interface ReadOptions {
  /** Used in messages only; formats are recognised by content. */
  filename: string;
  role: ArchiveRole;
  /** Evolution times given beside the file (NPY), µs. */
  times_us: number[] | null;
  /** Expanded bytes above which a compressed file is refused. */
  maxExpandedBytes: number;
}

/** One reader a format: bytes to shot batches; its return value is the summary, or the Problem that ended it. */
export type ShotReader = (source: ByteSource, options: ReadOptions) => AsyncGenerator<ShotBatch, ReadSummary | Problem>;
