import type { archives } from "@/db/schema/archives";
import { problemDocument, type ProblemDocument } from "@/lib/http/answers";
import type { RunRow, RunVersionRow } from "./find-run";

export type RunStatus = "empty" | "ingesting" | "ready" | "failed";

export interface ShownArchive {
  id: string;
  filename: string;
  bytes: number;
  sha256: string;
  role: "shots" | "calibration-dark" | "calibration-bright";
  state: "waiting" | "read" | "refused";
  format: string | null;
  problem: ProblemDocument | null;
  createdAt: string;
  createdBy: string;
}

export interface ArchiveWithBytes {
  archive: typeof archives.$inferSelect;
  bytes: number;
  sha256: string | null;
  createdBy: string;
}

export interface RunParts {
  run: RunRow;
  version: RunVersionRow | null;
  archives: ArchiveWithBytes[];
  createdBy: string;
  ingesting: boolean;
  latestJobId: string | null;
}

/** A run as the API shows it. */
export function showRun({ run, version, archives: rows, createdBy, ingesting, latestJobId }: RunParts) {
  return {
    id: run.id,
    title: run.title,
    notes: run.notes,
    status: runStatus(run, ingesting),
    brightIs: run.brightIs,
    model: run.model,
    jMaxHz: run.jMaxHz,
    alpha: run.alpha,
    campaign: run.campaign,
    positions: run.positions ?? version?.positions ?? null,
    version: run.currentVersion,
    sites: version?.sites ?? 0,
    siteNames: version?.siteNames ?? [],
    countType: version?.countType ?? null,
    times_us: version?.timesUs ?? [],
    shotsPerTime: version?.shotsPerTime ?? [],
    shotsSetAside: version?.shotsSetAside ?? {},
    calibrationDarkShots: version?.calibrationDarkShots ?? 0,
    calibrationBrightShots: version?.calibrationBrightShots ?? 0,
    warnings: version?.warnings ?? [],
    archives: rows.map(showArchive),
    problem: run.lastProblem ? problemDocument(run.lastProblem) : null,
    latestJobId,
    createdBy,
    createdAt: run.createdAt.toISOString(),
    updatedAt: run.updatedAt.toISOString(),
  };
}
export type ShownRun = ReturnType<typeof showRun>;

/** A version that was read stands, whatever happened to archives after it. */
export function runStatus(run: Pick<RunRow, "currentVersion" | "lastProblem">, ingesting: boolean): RunStatus {
  if (ingesting) return "ingesting";
  if (run.currentVersion > 0) return "ready";
  return run.lastProblem ? "failed" : "empty";
}

function showArchive({ archive, bytes, sha256, createdBy }: ArchiveWithBytes): ShownArchive {
  return {
    id: archive.id,
    filename: archive.filename,
    bytes,
    sha256: sha256 ?? "",
    role: archive.role,
    state: archive.state,
    format: archive.format,
    problem: archive.problem ? problemDocument(archive.problem) : null,
    createdAt: archive.createdAt.toISOString(),
    createdBy,
  };
}
