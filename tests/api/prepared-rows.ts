import { createHash } from "node:crypto";
import { database } from "@/db/connection";
import { newId } from "@/db/new-id";
import { analyses } from "@/db/schema/analyses";
import { archives } from "@/db/schema/archives";
import { blobChunks, blobs } from "@/db/schema/blobs";
import { detections } from "@/db/schema/detections";
import { frontStudies } from "@/db/schema/front-studies";
import { jobs } from "@/db/schema/jobs";
import { runVersions } from "@/db/schema/run-versions";
import { runs } from "@/db/schema/runs";
import { tokens } from "@/db/schema/tokens";
import type { Member } from "./factories";

const POSITIONS = [[0], [1]];
const SHOTS_FILE = Buffer.from("time_us,site_0,site_1\n0,1,0\n0,0,9\n");

/** One id of each kind of thing that paths name, by the collection in the path. */
export type PreparedIds = Record<"runs" | "archives" | "jobs" | "detections" | "analyses" | "studies" | "tokens", string>;

/** Writes a run with everything that hangs on it, and a token of the member's own; returns their ids. */
export async function prepareRows({ groupId, userId: createdBy }: Pick<Member, "groupId" | "userId">): Promise<PreparedIds> {
  const createdAt = new Date();
  const ids: PreparedIds = { runs: newId(), archives: newId(), jobs: newId(), detections: newId(), analyses: newId(), studies: newId(), tokens: newId() };
  const made = { groupId, runId: ids.runs, createdBy, createdAt };
  const archive = { archiveId: ids.archives, filename: "shots.csv", sha256: sha256Of(ids.archives), role: "shots", format: "csv" } as const;

  await database().insert(runs).values({
    ...made, id: ids.runs, title: "Prepared", notes: "", brightIs: "up", model: "ising", currentVersion: 1, updatedAt: createdAt,
  });
  const blobId = newId();
  await database().insert(blobs).values({ id: blobId, groupId, sha256: archive.sha256, bytes: SHOTS_FILE.length, complete: true, createdAt });
  await database().insert(blobChunks).values({ blobId, seq: 0, data: SHOTS_FILE });
  await database().insert(archives).values({ ...made, id: ids.archives, blobId, filename: archive.filename, role: "shots", state: "read", format: "csv" });
  await database().insert(runVersions).values({
    runId: ids.runs, number: 1, groupId, archives: [archive], sites: 2, siteNames: ["site_0", "site_1"], countType: "uint16", timesUs: [0], timeSlots: [0],
    shotsPerTime: [2], shotsSetAside: {}, calibrationDarkShots: 0, calibrationBrightShots: 0, brightness: [[0.5, 4.5]], warnings: [], createdAt,
  });
  const [analysisJobId, studyJobId] = [newId(), newId()];
  const ended = { ...made, progress: 1, notBefore: createdAt, finishedAt: createdAt };
  await database().insert(jobs).values([
    { ...ended, id: ids.jobs, kind: "ingest", payload: { kind: "ingest", runId: ids.runs }, state: "done" },
    { ...ended, id: analysisJobId, kind: "analysis", payload: { kind: "analysis", analysisId: ids.analyses, runId: ids.runs }, state: "cancelled" },
    { ...ended, id: studyJobId, kind: "study", payload: { kind: "study", studyId: ids.studies, runId: ids.runs }, state: "cancelled" },
  ]);
  await database().insert(detections).values({ ...made, id: ids.detections, runVersion: 1, number: 1, method: "fixed", sites: [0, 1].map(preparedSite) });
  await database().insert(analyses).values({ ...made, id: ids.analyses, runVersion: 1, detectionId: ids.detections, number: 1, jobId: analysisJobId, ...preparedAnalysis(ids.detections) });
  await database().insert(frontStudies).values({ groupId, createdBy, createdAt, id: ids.studies, analysisId: ids.analyses, kind: "sweep", parameters: { kind: "sweep" }, jobId: studyJobId });
  await database().insert(tokens).values({
    id: ids.tokens, groupId, userId: createdBy, name: "Prepared", scopes: ["read"], secretHash: sha256Of(ids.tokens), hint: "sl_prepa", createdAt,
    expiresAt: new Date(createdAt.getTime() + 3600_000),
  });
  return ids;
}

function sha256Of(text: string): string {
  return createHash("sha256").update(text).digest("hex");
}

function preparedSite(site: number) {
  return {
    site, threshold: 3.5, falseBright: null, falseDark: null, falseBrightInterval: null, falseDarkInterval: null, fidelity: null, evidence: null,
    mixture: null, warnings: [],
  };
}

function preparedAnalysis(detectionId: string) {
  return {
    parameters: {
      detectionId,
      readoutCorrection: false,
      estimator: "plug-in" as const,
      reading: "threshold" as const,
      bootstrap: { replicates: 10, seed: 1, interval: "percentile" as const, blockLength: 1 },
      traces: { kind: "reference" as const, site: 0 },
      front: { rule: "fraction-of-max" as const, level: 0.1, method: "isotonic" as const, hold: 2, minSignal: 5, absolute: false, throughOrigin: false, powerLawIn: "log-time" as const, covariance: "diagonal" as const },
    },
    provenance: { runVersion: 1, archives: [], brightIs: "up" as const, positions: POSITIONS, detectionNumber: 1, programVersion: "0" },
  };
}
