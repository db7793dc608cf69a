import "server-only";
import { and, eq } from "drizzle-orm";
import { database } from "@/db/connection";
import { analyses } from "@/db/schema/analyses";
import { jobs } from "@/db/schema/jobs";
import { runs } from "@/db/schema/runs";
import type { Actor } from "@/lib/accounts/policy";
import { isProblem, problem, type Problem } from "@/lib/problem";

/** The analysis that a study asks about. */
export type StudySubject = NonNullable<Awaited<ReturnType<typeof selectSubject>>>;

async function selectSubject(actor: Pick<Actor, "groupId">, analysisId: string) {
  const [row] = await database()
    .select({ analysis: analyses, run: runs, state: jobs.state })
    .from(analyses)
    .innerJoin(runs, eq(runs.id, analyses.runId))
    .innerJoin(jobs, eq(jobs.id, analyses.jobId))
    .where(and(eq(analyses.id, analysisId), eq(analyses.groupId, actor.groupId)));
  return row ?? null;
}

/** Returns an analysis of the member's group with its run, or the Problem that there is none. Asking about it needs no right to read it. */
export async function findSubjectInGroup(actor: Pick<Actor, "groupId">, analysisId: string): Promise<StudySubject | Problem> {
  return (await selectSubject(actor, analysisId)) ?? problem("not-found", "There is no such analysis.");
}

/** For `serve`: the Problem that a path's analysis is not there for this member, before anything sent with the call is looked at. */
export async function absentAnalysis({ actor, params }: { actor: Pick<Actor, "groupId">; params: { analysisId: string } }): Promise<Problem | null> {
  const subject = await findSubjectInGroup(actor, params.analysisId);
  return isProblem(subject) ? subject : null;
}
