import "server-only";
import { database } from "@/db/connection";
import type { Actor } from "@/lib/accounts/policy";
import { isProblem, type Problem } from "@/lib/problem";
import { findRunInGroup } from "@/lib/runs/find-run";
import { findRunAnalyses } from "./find-analysis";
import { showAnalysis, type ShownAnalysis } from "./show-analysis";

const MOST = 200;

/** Returns the latest analyses of a run, newest first. */
export async function listAnalyses(actor: Actor, runId: string): Promise<ShownAnalysis[] | Problem> {
  const rows = await findRunAnalyses(actor, runId, MOST);
  if (isProblem(rows)) return rows;
  const run = await findRunInGroup(database(), actor, runId);
  return isProblem(run) ? run : rows.map(showAnalysis);
}
