import "server-only";
import type { Actor } from "@/lib/accounts/policy";
import { findAnalysis } from "@/lib/analyses/find-analysis";
import { invalidAt, isProblem, problem, type Problem } from "@/lib/problem";
import type { SweepResult } from "@/lib/science/studies/sweep-result";
import { findStudyResults, type StudyRow } from "./find-study";
import { sweepCsv } from "./sweep-csv";

/** Returns the combinations of a finished sweep as CSV with its file's name; other kinds of study have no table. */
export async function exportStudy(actor: Actor, { study, job }: StudyRow): Promise<{ text: string; filename: string } | Problem> {
  if (study.kind !== "sweep") return invalidAt("format", "only a sweep has a table of combinations");
  const result = (await findStudyResults(actor, [study.id])).get(study.id);
  if (!result) return problem("conflict", `The study is not finished: its job is ${job.state}.`, [{ where: "study", message: job.state }]);
  const analysis = await findAnalysis(actor, study.analysisId);
  if (isProblem(analysis)) return analysis;
  return { text: sweepCsv(analysis, result as unknown as SweepResult), filename: `sweep-${analysis.analysis.number}.csv` };
}
