import "server-only";
import { and, eq, max } from "drizzle-orm";
import { database } from "@/db/connection";
import { newId } from "@/db/new-id";
import { analyses, type AnalysisParameters, type AnalysisProvenance } from "@/db/schema/analyses";
import { detections } from "@/db/schema/detections";
import { runVersions } from "@/db/schema/run-versions";
import { runs } from "@/db/schema/runs";
import { inTransaction, type Executor } from "@/db/transaction";
import { refusal, type Actor } from "@/lib/accounts/policy";
import { enqueueJob } from "@/lib/jobs/enqueue-job";
import { invalidAt, isProblem, problem, type Problem } from "@/lib/problem";
import { findRunInGroup, type RunRow, type RunVersionRow } from "@/lib/runs/find-run";
import type { CreateAnalysisInput } from "./analysis-schemas";
import { positionsOf } from "./analysis-positions";
import { blockLengthProblem, planTraces, replicatesProblem, sitesProblem } from "./plan-analysis";
import { planReading } from "./plan-reading";
import { PROGRAM_VERSION } from "./program-version";

export interface StartedAnalysis {
  analysis: { id: string; number: number };
  job: { id: string };
}

/** Records an analysis with all it depends on and puts it into the queue. What could not work is refused before. */
export async function createAnalysis(actor: Actor, runId: string, input: CreateAnalysisInput): Promise<StartedAnalysis | Problem> {
  const refused = refusal(actor, "analysis.create");
  if (refused) return refused;
  const run = await findRunInGroup(database(), actor, runId);
  if (isProblem(run)) return run;
  const found = await findDetection(database(), actor, run, input.detectionId);
  if (isProblem(found)) return found;
  const { detection, version } = found;
  const positions = positionsOf(run.positions, version.positions, version.sites);
  const { label, ...parameters } = input;
  const impossible = checkParameters(parameters, detection.sites, run, version, positions);
  if (impossible) return impossible;
  const provenance: AnalysisProvenance = {
    runVersion: version.number,
    archives: version.archives,
    brightIs: run.brightIs,
    positions,
    detectionNumber: detection.number,
    programVersion: PROGRAM_VERSION,
  };
  return inTransaction(database(), async (transaction) => {
    // The run's row is the lock under which numbers are given.
    const [locked] = await transaction.select({ id: runs.id }).from(runs).where(and(eq(runs.id, runId), eq(runs.groupId, actor.groupId))).for("update");
    if (!locked) return problem("not-found", "There is no such run.");
    const [{ last }] = await transaction.select({ last: max(analyses.number) }).from(analyses).where(eq(analyses.runId, runId));
    const id = newId();
    const number = (last ?? 0) + 1;
    const jobId = await enqueueJob(transaction, { groupId: actor.groupId, userId: actor.userId, payload: { kind: "analysis", analysisId: id, runId } });
    await transaction.insert(analyses).values({
      id,
      groupId: actor.groupId,
      runId,
      runVersion: version.number,
      detectionId: detection.id,
      number,
      label: label || null,
      parameters,
      provenance,
      jobId,
      createdBy: actor.userId,
      createdAt: new Date(),
    });
    return { analysis: { id, number }, job: { id: jobId } };
  });
}

type DetectionRow = typeof detections.$inferSelect;

async function findDetection(executor: Executor, actor: Actor, run: RunRow, detectionId: string): Promise<{ detection: DetectionRow; version: RunVersionRow } | Problem> {
  const [row] = await executor
    .select({ detection: detections, version: runVersions })
    .from(detections)
    .innerJoin(runVersions, and(eq(runVersions.runId, detections.runId), eq(runVersions.number, detections.runVersion)))
    .where(and(eq(detections.id, detectionId), eq(detections.runId, run.id), eq(detections.groupId, actor.groupId)));
  return row ?? invalidAt("detectionId", "is not a detection of this run");
}

function checkParameters(parameters: AnalysisParameters, sites: DetectionRow["sites"], run: RunRow, version: RunVersionRow, positions: number[][]): Problem | null {
  if (positions.length !== version.sites) return invalidAt("positions", `the run gives ${positions.length} positions for ${version.sites} sites`);
  const unfit = sitesProblem(version.sites);
  if (unfit) return unfit;
  const tooLong = blockLengthProblem(parameters.bootstrap.blockLength, version.shotsPerTime);
  if (tooLong) return tooLong;
  const plan = planTraces(parameters.traces, positions);
  if (isProblem(plan)) return plan;
  const tooLarge = replicatesProblem(plan, version.timesUs.length, parameters.bootstrap.replicates);
  if (tooLarge) return tooLarge;
  const { countType } = version;
  const reading = planReading({ parameters, sites, countType, brightIs: run.brightIs, seed: parameters.bootstrap.seed, replicates: 0 });
  return isProblem(reading) ? reading : null;
}
