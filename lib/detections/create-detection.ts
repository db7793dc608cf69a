import "server-only";
import { and, eq, max } from "drizzle-orm";
import { database } from "@/db/connection";
import { newId } from "@/db/new-id";
import { detections, type DetectionSite } from "@/db/schema/detections";
import { runs } from "@/db/schema/runs";
import { inTransaction } from "@/db/transaction";
import { refusal, type Actor } from "@/lib/accounts/policy";
import { invalidAt, isProblem, problem, type Problem } from "@/lib/problem";
import { findCurrentVersion, findRunInGroup, type RunVersionRow } from "@/lib/runs/find-run";
import { loadCalibration, loadHistograms } from "@/lib/runs/load-counts";
import { driftWarning, type SiteDrift } from "@/lib/science/detection/brightness-drift";
import { detect } from "@/lib/science/detection/detect";
import type { CreateDetectionInput } from "./detection-schemas";
import { showDetection, type DetectionRow, type ShownDetection } from "./show-detection";

/** Makes the next numbered detection of a run from its current version; one that is saved is never changed. */
export async function createDetection(actor: Actor, runId: string, input: CreateDetectionInput): Promise<ShownDetection | Problem> {
  const refused = refusal(actor, "detection.create");
  if (refused) return refused;
  const run = await findRunInGroup(database(), actor, runId);
  if (isProblem(run)) return run;
  const version = await findCurrentVersion(database(), run);
  if (!version) return problem("conflict", "The run has no shots yet; send an archive and wait until it is read.");
  const detected = await detectSites(version, input);
  if (isProblem(detected)) return detected;
  return inTransaction(database(), async (transaction) => {
    // The run's row is the lock under which numbers are given.
    const [locked] = await transaction.select({ id: runs.id }).from(runs).where(and(eq(runs.id, runId), eq(runs.groupId, actor.groupId))).for("update");
    if (!locked) return problem("not-found", "There is no such run.");
    const [{ last }] = await transaction.select({ last: max(detections.number) }).from(detections).where(eq(detections.runId, runId));
    const row = {
      id: newId(),
      groupId: actor.groupId,
      runId,
      runVersion: version.number,
      number: (last ?? 0) + 1,
      method: input.method,
      label: input.label || null,
      sites: detected.sites,
      model: detected.model,
      createdBy: actor.userId,
      createdAt: new Date(),
    };
    await transaction.insert(detections).values(row);
    return showDetection(row, actor.userName, run.currentVersion);
  });
}

async function detectSites(version: RunVersionRow, input: CreateDetectionInput): Promise<Pick<DetectionRow, "sites" | "model"> | Problem> {
  const key = { runId: version.runId, version: version.number };
  const [histograms, calibration] = await Promise.all([loadHistograms(database(), key, "shots"), loadCalibration(database(), key, version.sites)]);
  const detected = detect({
    method: input.method,
    model: input.model,
    thresholdScope: input.thresholdScope,
    thresholds: input.thresholds ?? (input.threshold === undefined ? null : [input.threshold]),
    histograms,
    countKind: version.countType === "uint16" ? "whole" : "fractional",
    calibration,
  });
  if (detected.kind === "refused") return invalidAt(detected.where, detected.message);
  return { model: detected.model, sites: detected.sites.map((site) => withDrift(site, version.drift?.[site.site])) };
}

/** Drift is known from the reading of the shots, not from their histograms. */
function withDrift(site: DetectionSite, drift: SiteDrift | undefined): DetectionSite {
  const warning = drift === undefined ? null : driftWarning(drift);
  return warning === null ? site : { ...site, warnings: [...site.warnings, warning] };
}
