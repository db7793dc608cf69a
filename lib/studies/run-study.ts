import "server-only";
import { eq } from "drizzle-orm";
import { frontStudies, type StudyParameters } from "@/db/schema/front-studies";
import type { JobContext, JobRow, RefusedJob } from "@/lib/jobs/job-context";
import { isProblem, problem } from "@/lib/problem";
import { loadStudy, type StudyInputs } from "./load-study";
import { runNullFront } from "./run-null-front";
import { runSelfTest } from "./run-self-test";
import { runSweep } from "./run-sweep";

/** Answers a study's question in the worker's threads. The same parameters give the same bytes on any number of threads. */
export async function runStudyJob(job: JobRow, context: JobContext): Promise<RefusedJob | null> {
  const inputs = await loadStudy(context.database, job);
  if (!inputs) return { problem: problem("not-found", "The run, the analysis or the study has been removed.") };
  const { study } = inputs;
  const result = await answer(inputs, study.parameters, context);
  if (isProblem(result)) return { problem: result };
  context.signal.throwIfAborted();
  await context.finish(async (transaction) => {
    await transaction.update(frontStudies).set({ result: { ...result }, finishedAt: new Date() }).where(eq(frontStudies.id, study.id));
    return { studyId: study.id, analysisId: study.analysisId };
  });
  return null;
}

function answer(inputs: StudyInputs, parameters: StudyParameters, context: JobContext) {
  switch (parameters.kind) {
    case "sweep":
      return runSweep(inputs, context);
    case "null-front":
      return runNullFront(inputs, parameters, context);
    case "self-test":
      return runSelfTest(inputs, parameters, context);
  }
}
