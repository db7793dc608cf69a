import type { ArchiveRole, ShotBatch } from "@/lib/formats/shot-batch";
import { invalidAt, type Problem } from "@/lib/problem";

const BATCH_SHOTS = 4096;
const BATCH_BYTES = 1_048_576;
const LARGEST_FLOAT32 = 3.4028234663852886e38;

/**
 * Gathers shots into batches of bounded size. Counts are uint16 until the first fraction, float32 from then on. A whole
 * count outside 0 … 65 535 is allowed only in a file that has fractions somewhere, which is known only at its end.
 */
export class BatchBuilder {
  /** `[site]`, the counts of the next shot, NaN where missing: filled by the reader before `push`. */
  readonly row: Float64Array;
  shots = 0;
  private readonly capacity: number;
  private readonly role: ArchiveRole;
  private readonly placeOf: (site: number) => string;
  private ready: ShotBatch[] = [];
  private batch: ShotBatch | null = null;
  private float = false;
  private fractional = false;
  private refusal: Problem | null = null;

  /** `placeOf` names the place of a count of the shot being pushed. */
  constructor(role: ArchiveRole, sites: number, placeOf: (site: number) => string) {
    this.row = new Float64Array(sites);
    this.role = role;
    this.placeOf = placeOf;
    this.capacity = Math.max(1, Math.min(BATCH_SHOTS, Math.floor(BATCH_BYTES / (4 * sites))));
  }

  /** Appends the shot in `row`; the time of a calibration shot is dropped. */
  push(time_us: number, shotNumber: number): void {
    this.judgeRow();
    const batch = this.openBatch();
    const s = batch.shots++;
    this.shots++;
    batch.times_us[s] = this.role === "shots" ? time_us : NaN;
    batch.shotNumbers[s] = shotNumber;
    const { row } = this;
    const { counts } = batch;
    const at = s * row.length;
    for (let i = 0; i < row.length; i++) {
      const count = row[i];
      counts[at + i] = count;
      if (Number.isNaN(count)) batch.missing[s] = 1;
    }
    if (batch.shots === this.capacity) this.closeBatch();
  }

  /** Returns the batches that are full since the last call. */
  takeReady(): ShotBatch[] {
    const { ready } = this;
    this.ready = [];
    return ready;
  }

  /** Ends the file: the last batch is ready, or the Problem says why the file is refused. */
  finish(): Problem | null {
    if (this.shots === 0) return invalidAt("file", `holds no ${this.role === "shots" ? "shots" : "calibration shots"}`);
    this.closeBatch();
    return this.fractional ? null : this.refusal;
  }

  private judgeRow(): void {
    const { row } = this;
    for (let i = 0; i < row.length; i++) {
      const count = row[i];
      if ((count & 0xffff) !== count && !Number.isNaN(count)) this.judge(count, i);
    }
  }

  private judge(count: number, site: number): void {
    if (!this.float) {
      this.closeBatch();
      this.float = true;
    }
    if (!Number.isInteger(count)) this.fractional = true;
    else if (this.refusal === null) this.refusal = invalidAt(this.placeOf(site), wholeCountMessage(count));
  }

  private openBatch(): ShotBatch {
    if (this.batch !== null) return this.batch;
    const { capacity, role } = this;
    const sites = this.row.length;
    const counts = this.float ? new Float32Array(capacity * sites) : new Uint16Array(capacity * sites);
    const missing = new Uint8Array(capacity);
    this.batch = { role, shots: 0, sites, times_us: new Float64Array(capacity), shotNumbers: new Float64Array(capacity), counts, missing };
    return this.batch;
  }

  private closeBatch(): void {
    const { batch } = this;
    if (batch === null) return;
    const { shots, sites } = batch;
    this.ready.push({
      ...batch,
      times_us: batch.times_us.slice(0, shots),
      shotNumbers: batch.shotNumbers.slice(0, shots),
      counts: batch.counts.slice(0, shots * sites),
      missing: batch.missing.slice(0, shots),
    });
    this.batch = null;
  }
}

/** Whether a count fits float32, the widest kind kept. */
export function fitsCount(count: number): boolean {
  return Number.isNaN(count) || Math.abs(count) <= LARGEST_FLOAT32;
}

function wholeCountMessage(count: number): string {
  if (count < 0) return `${count} is a negative count; whole counts are 0 … 65535`;
  return `${count} is above 65535, the largest whole count kept`;
}
