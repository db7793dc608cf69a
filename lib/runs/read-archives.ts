import "server-only";
import type { Database } from "@/db/connection";
import { archiveSource } from "@/lib/archives/archive-source";
import { readShots } from "@/lib/formats/read-shots";
import type { ReadSummary, ShotBatch } from "@/lib/formats/shot-batch";
import { invalidAt, isProblem, type Problem } from "@/lib/problem";
import type { VersionKey } from "./block-store";
import { ShotCollector } from "./shot-collector";

/** An archive as it is to be read. */
export interface ReadableArchive {
  id: string;
  blobId: string;
  filename: string;
  bytes: number;
  role: "shots" | "calibration-dark" | "calibration-bright";
  timesUs: number[] | null;
}

/** What all archives of a run gave together. */
export interface ReadRun {
  /** Null when there were no shots at all. */
  collector: ShotCollector | null;
  sites: number;
  siteNames: string[];
  positions: number[][] | null;
  /** `[archive]`, in the order given. */
  formats: string[];
}

/** The archive that cannot be part of the run, and why. */
export interface RefusedArchive {
  archiveId: string;
  problem: Problem;
}

interface Reading {
  database: Database;
  key: VersionKey;
  signal: AbortSignal;
  progress: (stage: string, fraction: number) => void;
}

/** A file may grow this much when it is expanded; counts compress well, but not without end. */
const MOST_EXPANSION = 250;
const FREE_EXPANSION_BYTES = 256 * 1024 * 1024;
/** Every time has a writer of its own; ten times what a run may have. */
const MOST_TIMES = 10_000;

/** Reads archives in order into blocks of a new version; stops at the first that is broken or does not fit the others. */
export async function readArchives(archives: ReadableArchive[], reading: Reading): Promise<ReadRun | RefusedArchive> {
  const run: ReadRun = { collector: null, sites: 0, siteNames: [], positions: null, formats: [] };
  const totalBytes = archives.reduce((sum, { bytes }) => sum + bytes, 0);
  let bytesRead = 0;
  for (const [order, archive] of archives.entries()) {
    const bytesBefore = bytesRead;
    const onRead = (bytes: number) => {
      bytesRead = Math.min(bytesBefore + archive.bytes, bytesRead + bytes);
      reading.progress(`reading ${archive.filename}`, (0.98 * bytesRead) / Math.max(1, totalBytes));
    };
    const summary = await readArchive(archive, run, reading, onRead);
    if (isProblem(summary)) return { archiveId: archive.id, problem: summary };
    run.formats.push(summary.format);
    run.positions ??= summary.positions;
    // Names come from the first archive of shots; one of calibration shots lends its own until then.
    const shotsBefore = archives.slice(0, order).some(({ role }) => role === "shots");
    if (order === 0 || (archive.role === "shots" && !shotsBefore)) run.siteNames = summary.siteNames;
    await run.collector?.endArchive();
  }
  return run;
}

async function readArchive(archive: ReadableArchive, run: ReadRun, reading: Reading, onRead: (bytes: number) => void): Promise<ReadSummary | Problem> {
  const source = archiveSource(reading.database, archive.blobId, archive.bytes, onRead);
  const batches = readShots(source, {
    filename: archive.filename,
    role: archive.role,
    times_us: archive.timesUs,
    maxExpandedBytes: Math.max(FREE_EXPANSION_BYTES, MOST_EXPANSION * archive.bytes),
  });
  for (;;) {
    reading.signal.throwIfAborted();
    const step = await batches.next();
    if (step.done) return step.value;
    const misfit = sitesMisfit(archive, run, step.value);
    if (misfit) {
      await batches.return(misfit);
      return misfit;
    }
    run.collector ??= new ShotCollector(reading.database, reading.key, step.value.sites);
    run.sites = step.value.sites;
    await run.collector.add(step.value);
    const { timeCount } = run.collector;
    if (timeCount > MOST_TIMES) {
      const tooMany = invalidAt(archive.filename, `more than ${MOST_TIMES} evolution times; is its time column the time of day?`);
      await batches.return(tooMany);
      return tooMany;
    }
  }
}

function sitesMisfit(archive: ReadableArchive, run: ReadRun, batch: ShotBatch): Problem | null {
  if (run.sites === 0 || batch.sites === run.sites) return null;
  return invalidAt(archive.filename, `has ${batch.sites} sites, but the archives before it have ${run.sites}`);
}
