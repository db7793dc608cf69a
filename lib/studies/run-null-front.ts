import "server-only";
import type { StudyParameters } from "@/db/schema/front-studies";
import { positionColumns } from "@/lib/analyses/analysis-positions";
import { readJson } from "@/lib/analyses/result-arrays";
import type { JobContext } from "@/lib/jobs/job-context";
import { invalidAt, isProblem, type Problem } from "@/lib/problem";
import type { FrontResult } from "@/lib/science/front/front-result";
import { frontNumbers } from "@/lib/science/studies/front-numbers";
import { judgeNullFront } from "@/lib/science/studies/judge-null-front";
import type { NullFrontPlan } from "@/lib/science/studies/null-front";
import type { NullFrontInput } from "@/lib/science/studies/null-front-input";
import type { NullFrontRepeat, NullFrontResult } from "@/lib/science/studies/null-front-result";
import { isStudyRefusal, type StudyRefusal } from "@/lib/science/studies/study-refusal";
import type { StudyInputs } from "./load-study";
import { repeatsInThreads } from "./repeats-in-threads";
import { readingNotes, simulatedAnalysis } from "./simulated-analysis";

/** Runs the analysis on simulated runs of the nearest-neighbour chain. */
export async function runNullFront(inputs: StudyInputs, asked: Extract<StudyParameters, { kind: "null-front" }>, context: JobContext): Promise<NullFrontResult | Problem> {
  const simulated = simulatedAnalysis(inputs, asked.seed);
  if (isProblem(simulated)) return simulated;
  const front = await readJson<FrontResult>(context.database, inputs.analysis.id, "front");
  const input: NullFrontInput = {
    ...simulated,
    model: asked.model,
    positions: positionColumns(inputs.analysis.provenance.positions),
    jMax_hz: asked.jMaxHz,
    observedPoints: front.points,
  };
  context.progress("solving the nearest-neighbour chain", 0);
  const plan = (await context.pool.run(input, { name: "nullFrontPlanInThread", signal: context.signal })) as NullFrontPlan | StudyRefusal;
  if (isStudyRefusal(plan)) return invalidAt(plan.where, plan.message);
  const repeats = await repeatsInThreads<NullFrontPlan, NullFrontRepeat>("nullFrontRepeatsInThread", plan, asked.repeats, context);
  const result = judgeNullFront(plan, repeats, frontNumbers(front).gamma);
  return { ...result, warnings: [...readingNotes(inputs), ...result.warnings] };
}
