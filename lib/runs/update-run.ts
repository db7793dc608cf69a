import "server-only";
import { and, eq } from "drizzle-orm";
import { database } from "@/db/connection";
import { runs } from "@/db/schema/runs";
import { refusal, type Actor } from "@/lib/accounts/policy";
import { invalidAt, isProblem, type Problem } from "@/lib/problem";
import { findCurrentVersion, findRunInGroup } from "./find-run";
import { getRunInGroup } from "./get-run";
import type { UpdateRunInput } from "./run-schemas";
import type { ShownRun } from "./show-run";

/** Changes a run's metadata; shots and saved results stay untouched. */
export async function updateRun(actor: Actor, runId: string, input: UpdateRunInput): Promise<ShownRun | Problem> {
  const refused = refusal(actor, "run.update");
  if (refused) return refused;
  const run = await findRunInGroup(database(), actor, runId);
  if (isProblem(run)) return run;
  const version = await findCurrentVersion(database(), run);
  if (input.positions && version && input.positions.length !== version.sites) {
    return invalidAt("positions", `gives ${input.positions.length} positions, but the run has ${version.sites} sites`);
  }
  const change = { ...input, ...(input.campaign === "" && { campaign: null }), updatedAt: new Date() };
  await database().update(runs).set(change).where(and(eq(runs.id, runId), eq(runs.groupId, actor.groupId)));
  return getRunInGroup(actor, runId);
}
