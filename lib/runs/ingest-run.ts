import "server-only";
import { and, asc, eq, inArray } from "drizzle-orm";
import { archives } from "@/db/schema/archives";
import { blobs } from "@/db/schema/blobs";
import { runVersions } from "@/db/schema/run-versions";
import { runs } from "@/db/schema/runs";
import { BRIGHT_SLOT, DARK_SLOT } from "@/db/schema/shot-blocks";
import { siteHistograms } from "@/db/schema/site-histograms";
import type { Transaction } from "@/db/transaction";
import { enqueueJob } from "@/lib/jobs/enqueue-job";
import { withRunLock } from "@/lib/jobs/run-lock";
import type { JobContext, JobRow, RefusedJob } from "@/lib/jobs/job-context";
import { invalidAt, type Problem } from "@/lib/problem";
import { removeLeftovers, type VersionKey } from "./block-store";
import type { RunRow } from "./find-run";
import { readArchives, type ReadableArchive, type ReadRun, type RefusedArchive } from "./read-archives";
import { versionWarnings } from "./version-warnings";

type ArchiveToRead = ReadableArchive & { sha256: string; state: "waiting" | "read" | "refused" };

/**
 * Reads all archives of a run, in order of arrival, into a new version that becomes visible in one step. A broken archive
 * is refused with the place named, and the run stays as it was. Nothing is read when no archive waits.
 */
export function ingestRun(job: JobRow, context: JobContext): Promise<RefusedJob | null> {
  return withRunLock(context.database, job.runId, async () => {
    const clear = () => removeLeftovers(context.database, job.runId);
    await clear();
    try {
      const refused = await readRun(job, context);
      if (refused) await clear();
      return refused;
    } catch (error) {
      await clear();
      throw error;
    }
  });
}

/** Writes to the run why its reading was given up. */
export async function recordGivenUp(transaction: Transaction, { runId, groupId }: JobRow, problem: Problem): Promise<void> {
  await transaction.update(runs).set({ lastProblem: problem, updatedAt: new Date() }).where(and(eq(runs.id, runId), eq(runs.groupId, groupId)));
}

async function readRun(job: JobRow, context: JobContext): Promise<RefusedJob | null> {
  const [run] = await context.database.select().from(runs).where(and(eq(runs.id, job.runId), eq(runs.groupId, job.groupId)));
  if (!run) return { problem: invalidAt("run", "has been removed") };
  const toRead = await archivesToRead(context, run);
  // Archives that came while the reading before this one began were taken in by it.
  if (!toRead.some(({ state }) => state === "waiting")) {
    await context.finish(async () => ({ version: run.currentVersion }));
    return null;
  }
  const key: VersionKey = { runId: run.id, version: run.currentVersion + 1 };
  const read = await readArchives(toRead, { ...context, key });
  const checked = "problem" in read ? read : (incomplete(read, toRead) ?? misplaced(run, read, toRead) ?? read);
  if ("problem" in checked) return refuse(job, run, checked);
  context.progress("storing", 0.99);
  await context.finish(async (transaction) => {
    const version = await showVersion(transaction, run, key, toRead, checked);
    return { version, shotsKept: checked.collector?.times().reduce((sum, { shots }) => sum + shots, 0) ?? 0 };
  });
  return null;
}

async function archivesToRead({ database }: JobContext, run: RunRow): Promise<ArchiveToRead[]> {
  const rows = await database
    .select({ archive: archives, bytes: blobs.bytes, sha256: blobs.sha256 })
    .from(archives)
    .innerJoin(blobs, eq(blobs.id, archives.blobId))
    .where(and(eq(archives.runId, run.id), eq(archives.groupId, run.groupId), inArray(archives.state, ["waiting", "read"])))
    .orderBy(asc(archives.createdAt), asc(archives.id));
  return rows.map(({ archive, bytes, sha256 }) => ({ ...archive, bytes, sha256: sha256 ?? "" }));
}

/** Shots that are all set aside make no run; without a word it would just stay empty. */
function incomplete({ collector }: ReadRun, toRead: ArchiveToRead[]): RefusedArchive | null {
  const last = toRead.findLast(({ role }) => role === "shots");
  if (!last || (collector && collector.times().length > 0)) return null;
  return { archiveId: last.id, problem: invalidAt(last.filename, "has no shot with all its counts") };
}

function misplaced(run: RunRow, read: ReadRun, toRead: ArchiveToRead[]): RefusedArchive | null {
  const positions = run.positions ?? read.positions;
  if (!positions || read.sites === 0 || positions.length === read.sites) return null;
  const last = toRead[toRead.length - 1];
  return { archiveId: last.id, problem: invalidAt("positions", `gives ${positions.length} positions, but ${last.filename} has ${read.sites} sites`) };
}

/** Marks the archive; others that wait are read by a job of their own. */
function refuse(job: JobRow, run: RunRow, { archiveId, problem }: RefusedArchive): RefusedJob {
  return {
    problem,
    record: async (transaction) => {
      await transaction.update(archives).set({ state: "refused", problem }).where(eq(archives.id, archiveId));
      await transaction.update(runs).set({ lastProblem: problem, updatedAt: new Date() }).where(eq(runs.id, run.id));
      const waiting = await transaction.select({ id: archives.id }).from(archives).where(and(eq(archives.runId, run.id), eq(archives.state, "waiting"))).limit(1);
      if (waiting.length > 0) await enqueueJob(transaction, { groupId: job.groupId, userId: job.createdBy, payload: job.payload });
    },
  };
}

/** Returns the number of the version that stands now. */
async function showVersion(transaction: Transaction, run: RunRow, key: VersionKey, read: ArchiveToRead[], { collector, ...found }: ReadRun): Promise<number> {
  for (const [order, archive] of read.entries()) {
    await transaction.update(archives).set({ state: "read", format: found.formats[order], problem: null }).where(eq(archives.id, archive.id));
  }
  const times = collector?.times() ?? [];
  // Calibration shots alone make no version: they are read again together with the first shots.
  if (!collector || times.length === 0) return run.currentVersion;
  const shotsPerTime = times.map(({ shots }) => shots);
  const histograms = collector.histograms.get("shots") ?? [];
  await transaction.insert(runVersions).values({
    runId: run.id,
    number: key.version,
    groupId: run.groupId,
    archives: read.map((archive, order) => ({ archiveId: archive.id, filename: archive.filename, sha256: archive.sha256, role: archive.role, format: found.formats[order] })),
    sites: found.sites,
    siteNames: found.siteNames,
    positions: found.positions,
    countType: collector.countType,
    timesUs: times.map(({ time_us }) => time_us),
    timeSlots: times.map(({ slot }) => slot),
    shotsPerTime,
    shotsSetAside: collector.setAside,
    calibrationDarkShots: collector.shotsIn(DARK_SLOT),
    calibrationBrightShots: collector.shotsIn(BRIGHT_SLOT),
    brightness: times.map(({ brightness }) => brightness),
    drift: collector.drift(),
    warnings: versionWarnings(histograms, found.siteNames, shotsPerTime),
    createdAt: new Date(),
  });
  for (const [role, sites] of collector.histograms) {
    for (const [site, { firstBin, frequencies }] of sites.entries()) {
      await transaction.insert(siteHistograms).values({ ...key, role, site, firstBin, data: Buffer.from(frequencies.buffer, frequencies.byteOffset, frequencies.byteLength) });
    }
  }
  await transaction.update(runs).set({ currentVersion: key.version, lastProblem: null, updatedAt: new Date() }).where(eq(runs.id, run.id));
  return key.version;
}
