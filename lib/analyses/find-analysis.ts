import "server-only";
import { and, desc, eq } from "drizzle-orm";
import { database } from "@/db/connection";
import { analyses } from "@/db/schema/analyses";
import { jobs } from "@/db/schema/jobs";
import { runVersions } from "@/db/schema/run-versions";
import { runs } from "@/db/schema/runs";
import { users } from "@/db/schema/users";
import { refusal, type Actor } from "@/lib/accounts/policy";
import { problem, type Problem } from "@/lib/problem";

const columns = {
  analysis: analyses,
  job: jobs,
  runTitle: runs.title,
  currentVersion: runs.currentVersion,
  siteNames: runVersions.siteNames,
  timesUs: runVersions.timesUs,
  createdByName: users.name,
};

/** An analysis with what its pages and exports need besides. */
export type AnalysisRow = Awaited<ReturnType<typeof selectAnalyses>>[number];

function selectAnalyses(actor: Actor, condition: ReturnType<typeof eq>, limit: number) {
  return database()
    .select(columns)
    .from(analyses)
    .innerJoin(runs, eq(runs.id, analyses.runId))
    .innerJoin(runVersions, and(eq(runVersions.runId, analyses.runId), eq(runVersions.number, analyses.runVersion)))
    .innerJoin(users, eq(users.id, analyses.createdBy))
    .innerJoin(jobs, eq(jobs.id, analyses.jobId))
    .where(and(eq(analyses.groupId, actor.groupId), condition))
    .orderBy(desc(analyses.createdAt), desc(analyses.id))
    .limit(limit);
}

/** Returns an analysis of the member's group. */
export async function findAnalysis(actor: Actor, analysisId: string): Promise<AnalysisRow | Problem> {
  const refused = refusal(actor, "analysis.read");
  if (refused) return refused;
  const [row] = await selectAnalyses(actor, eq(analyses.id, analysisId), 1);
  return row ?? problem("not-found", "There is no such analysis.");
}

/** Returns the latest analyses of a run of the member's group, newest first. */
export async function findRunAnalyses(actor: Actor, runId: string, limit: number): Promise<AnalysisRow[] | Problem> {
  return refusal(actor, "analysis.read") ?? selectAnalyses(actor, eq(analyses.runId, runId), limit);
}

/** Returns an analysis that is done, or says where it stands. */
export async function findFinishedAnalysis(actor: Actor, analysisId: string): Promise<AnalysisRow | Problem> {
  const row = await findAnalysis(actor, analysisId);
  if ("_tag" in row || row.analysis.summary !== null) return row;
  return problem("conflict", `The analysis is not finished: its job is ${row.job.state}.`, [{ where: "analysis", message: row.job.state }]);
}
