import "server-only";
import { and, desc, eq, inArray, sql } from "drizzle-orm";
import { database } from "@/db/connection";
import { analyses } from "@/db/schema/analyses";
import { frontStudies } from "@/db/schema/front-studies";
import { jobs } from "@/db/schema/jobs";
import { users } from "@/db/schema/users";
import { refusal, type Actor } from "@/lib/accounts/policy";
import { findAnalysis } from "@/lib/analyses/find-analysis";
import { isProblem, problem, type Problem } from "@/lib/problem";

/** A study with its job and who asked for it. */
export type StudyRow = Awaited<ReturnType<typeof selectStudies>>[number];

/** Without the result, of which lists show the sentence only. */
const head = {
  id: frontStudies.id,
  analysisId: frontStudies.analysisId,
  kind: frontStudies.kind,
  parameters: frontStudies.parameters,
  createdAt: frontStudies.createdAt,
  finishedAt: frontStudies.finishedAt,
};
const sentence = sql<string | null>`json_value(${frontStudies.result}, '$.sentence')`;

function selectStudies(actor: Actor, condition: ReturnType<typeof eq>, limit: number) {
  return database()
    .select({ study: head, sentence, job: jobs, runId: analyses.runId, createdByName: users.name })
    .from(frontStudies)
    .innerJoin(analyses, eq(analyses.id, frontStudies.analysisId))
    .innerJoin(jobs, eq(jobs.id, frontStudies.jobId))
    .innerJoin(users, eq(users.id, frontStudies.createdBy))
    .where(and(eq(frontStudies.groupId, actor.groupId), condition))
    .orderBy(desc(frontStudies.createdAt), desc(frontStudies.id))
    .limit(limit);
}

/** Returns a study of the member's group. */
export async function findStudy(actor: Actor, studyId: string): Promise<StudyRow | Problem> {
  const refused = refusal(actor, "analysis.read");
  if (refused) return refused;
  const [row] = await selectStudies(actor, eq(frontStudies.id, studyId), 1);
  return row ?? problem("not-found", "There is no such study.");
}

/** Returns the latest studies of an analysis of the member's group, newest first. */
export async function findAnalysisStudies(actor: Actor, analysisId: string, limit: number): Promise<StudyRow[] | Problem> {
  const analysis = await findAnalysis(actor, analysisId);
  return isProblem(analysis) ? analysis : selectStudies(actor, eq(frontStudies.analysisId, analysisId), limit);
}

/** Returns the results of studies of the member's group by their ids; those that are not done are left out. */
export async function findStudyResults(actor: Actor, studyIds: string[]): Promise<Map<string, Record<string, unknown>>> {
  if (studyIds.length === 0) return new Map();
  const rows = await database()
    .select({ id: frontStudies.id, result: frontStudies.result })
    .from(frontStudies)
    .where(and(eq(frontStudies.groupId, actor.groupId), inArray(frontStudies.id, studyIds)));
  return new Map(rows.flatMap(({ id, result }) => (result === null ? [] : [[id, result] as const])));
}
