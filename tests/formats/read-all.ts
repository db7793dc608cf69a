import { readShots } from "@/lib/formats/read-shots";
import type { ArchiveRole, ByteSource, ReadOptions, ReadSummary, ShotBatch } from "@/lib/formats/shot-batch";
import { isProblem, type Problem } from "@/lib/problem";

/** One shot as plain values; missing counts are null whatever the kind of the batch. */
export interface PlainShot {
  role: ArchiveRole;
  time_us: number;
  shot: number;
  counts: (number | null)[];
  missing: boolean;
}

export interface WholeFile {
  summary: ReadSummary;
  batches: ShotBatch[];
  shots: PlainShot[];
}

/** Reads a source to its end. */
export async function readAll(source: ByteSource, options: Partial<ReadOptions> = {}): Promise<WholeFile | Problem> {
  const reading = readShots(source, { filename: "shots.csv", role: "shots", times_us: null, maxExpandedBytes: 1e9, ...options });
  const batches: ShotBatch[] = [];
  for (;;) {
    const step = await reading.next();
    if (step.done !== true) batches.push(step.value);
    else return isProblem(step.value) ? step.value : { summary: step.value, batches, shots: batches.flatMap(plainShots) };
  }
}

/** Reads a source that must be good. */
export async function readGood(source: ByteSource, options: Partial<ReadOptions> = {}): Promise<WholeFile> {
  const file = await readAll(source, options);
  if (isProblem(file)) throw new Error(`Refused: ${file.detail}`);
  return file;
}

/** Returns the places a source is refused for; empty when it is read. */
export async function refusals(source: ByteSource, options: Partial<ReadOptions> = {}): Promise<string[]> {
  const file = await readAll(source, options);
  return isProblem(file) ? file.errors.map(({ where }) => where) : [];
}

/** Sorts by role, time and shot number, the order in which runs are compared. */
export function inRunOrder(shots: PlainShot[]): PlainShot[] {
  return [...shots].sort((a, b) => a.role.localeCompare(b.role) || (a.time_us || 0) - (b.time_us || 0) || a.shot - b.shot);
}

function plainShots(batch: ShotBatch): PlainShot[] {
  return Array.from({ length: batch.shots }, (_, s) => {
    const missing = batch.missing[s] === 1;
    const kept = Array.from(batch.counts.subarray(s * batch.sites, (s + 1) * batch.sites));
    const counts = kept.map((count) => (Number.isNaN(count) || (missing && count === 0) ? null : count));
    return { role: batch.role, time_us: batch.times_us[s], shot: batch.shotNumbers[s], counts, missing };
  });
}
