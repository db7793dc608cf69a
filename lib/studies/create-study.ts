import "server-only";
import { and, eq } from "drizzle-orm";
import { database } from "@/db/connection";
import { newId } from "@/db/new-id";
import { analyses } from "@/db/schema/analyses";
import { frontStudies, type StudyParameters } from "@/db/schema/front-studies";
import { inTransaction } from "@/db/transaction";
import { refusal, type Actor } from "@/lib/accounts/policy";
import { enqueueJob } from "@/lib/jobs/enqueue-job";
import { invalidAt, isProblem, problem, type Problem } from "@/lib/problem";
import { findSubjectInGroup, type StudySubject } from "./find-subject";
import type { CreateStudyInput } from "./study-schemas";

export interface StartedStudy {
  study: { id: string };
  job: { id: string };
}

/** Records a study of a finished analysis and puts it into the queue. What could not work is refused before. */
export async function createStudy(actor: Actor, analysisId: string, input: CreateStudyInput): Promise<StartedStudy | Problem> {
  const refused = refusal(actor, "study.create");
  if (refused) return refused;
  const subject = await findSubjectInGroup(actor, analysisId);
  if (isProblem(subject)) return subject;
  const impossible = whyNot(subject, input);
  if (impossible) return impossible;
  const parameters = parametersOf(input, subject.run);
  return inTransaction(database(), async (transaction) => {
    // Under this lock the analysis stays until its study is written.
    const [locked] = await transaction.select({ id: analyses.id }).from(analyses).where(and(eq(analyses.id, analysisId), eq(analyses.groupId, actor.groupId))).for("update");
    if (!locked) return problem("not-found", "There is no such analysis.");
    const id = newId();
    const jobId = await enqueueJob(transaction, { groupId: actor.groupId, userId: actor.userId, payload: { kind: "study", studyId: id, runId: subject.run.id } });
    await transaction.insert(frontStudies).values({ id, groupId: actor.groupId, analysisId, kind: input.kind, parameters, jobId, createdBy: actor.userId, createdAt: new Date() });
    return { study: { id }, job: { id: jobId } };
  });
}

function whyNot({ analysis, state }: StudySubject, { kind }: CreateStudyInput): Problem | null {
  if (analysis.summary === null) return problem("conflict", `The analysis is not finished: its job is ${state}.`, [{ where: "analysis", message: state }]);
  if (kind === "null-front" && analysis.provenance.positions.some((position) => position.length > 1)) {
    return invalidAt("kind", "a nearest-neighbour comparison needs a chain; the model is solved exactly in one dimension only");
  }
  if (kind === "self-test" && analysis.summary.gamma === null) return invalidAt("kind", "a self-test needs an analysis with a fitted power law");
  return null;
}

function parametersOf(input: CreateStudyInput, run: StudySubject["run"]): StudyParameters {
  if (input.kind !== "null-front") return input;
  const model = input.model ?? (run.model === "ising" ? "ising" : "xy");
  return { ...input, model, jMaxHz: input.jMaxHz === undefined ? run.jMaxHz : input.jMaxHz };
}
