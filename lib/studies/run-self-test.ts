import "server-only";
import type { StudyParameters } from "@/db/schema/front-studies";
import { positionColumns } from "@/lib/analyses/analysis-positions";
import { readArray, readJson } from "@/lib/analyses/result-arrays";
import type { JobContext } from "@/lib/jobs/job-context";
import { invalidAt, isProblem, type Problem } from "@/lib/problem";
import type { FrontResult } from "@/lib/science/front/front-result";
import { judgeSelfTest } from "@/lib/science/studies/judge-self-test";
import type { SelfTestPlan } from "@/lib/science/studies/self-test";
import type { SelfTestInput } from "@/lib/science/studies/self-test-input";
import type { SelfTestRepeat, SelfTestResult } from "@/lib/science/studies/self-test-result";
import { isStudyRefusal, type StudyRefusal } from "@/lib/science/studies/study-refusal";
import type { StudyInputs } from "./load-study";
import { repeatsInThreads } from "./repeats-in-threads";
import { readingNotes, simulatedAnalysis } from "./simulated-analysis";

/** Runs the analysis on simulated runs whose front is the one it has fitted. */
export async function runSelfTest(inputs: StudyInputs, asked: Extract<StudyParameters, { kind: "self-test" }>, context: JobContext): Promise<SelfTestResult | Problem> {
  const simulated = simulatedAnalysis(inputs, asked.seed);
  if (isProblem(simulated)) return simulated;
  const array = (name: string) => readArray(context.database, inputs.analysis.id, name);
  const input: SelfTestInput = {
    ...simulated,
    positions: positionColumns(inputs.analysis.provenance.positions),
    means: await array("mean"),
    observedTraces: {
      labels: simulated.traces.labels,
      distances: simulated.traces.distances,
      times_us: simulated.times_us,
      shotsPerTime: simulated.shotsPerTime,
      value: await array("traceValue"),
      error: await array("traceError"),
      replicateCount: 0,
      replicates: new Float64Array(0),
    },
    observedFront: await readJson<FrontResult>(context.database, inputs.analysis.id, "front"),
  };
  context.progress("building the truth from the fitted front", 0);
  const plan = (await context.pool.run(input, { name: "selfTestPlanInThread", signal: context.signal })) as SelfTestPlan | StudyRefusal;
  if (isStudyRefusal(plan)) return invalidAt(plan.where, plan.message);
  const repeats = await repeatsInThreads<SelfTestPlan, SelfTestRepeat>("selfTestRepeatsInThread", plan, asked.repeats, context);
  const result = judgeSelfTest(plan, repeats);
  return { ...result, warnings: [...readingNotes(inputs), ...result.warnings] };
}
