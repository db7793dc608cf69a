import "server-only";
import type { Actor } from "@/lib/accounts/policy";
import { isProblem, type Problem } from "@/lib/problem";
import { findAnalysisStudies } from "./find-study";
import { showStudyHead } from "./show-study";

const MOST = 100;

/** Returns the latest studies of an analysis, newest first. */
export async function listStudies(actor: Actor, analysisId: string): Promise<ReturnType<typeof showStudyHead>[] | Problem> {
  const rows = await findAnalysisStudies(actor, analysisId, MOST);
  return isProblem(rows) ? rows : rows.map(showStudyHead);
}
