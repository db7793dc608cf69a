import "server-only";
import { and, eq, inArray } from "drizzle-orm";
import { database } from "@/db/connection";
import { archives } from "@/db/schema/archives";
import { runs } from "@/db/schema/runs";
import { inTransaction, type Transaction } from "@/db/transaction";
import { refusal, type Actor } from "@/lib/accounts/policy";
import { invalidAt, isProblem, type Problem } from "@/lib/problem";
import { findCurrentVersion, lockRunInGroup } from "./find-run";
import { getRunInGroup } from "./get-run";
import { requestReading } from "./request-reading";
import type { UpdateRunInput } from "./run-schemas";
import type { ShownRun } from "./show-run";

/** Changes a run's metadata; shots and saved results stay untouched. Archives that only the positions kept out are read again. */
export async function updateRun(actor: Actor, runId: string, input: UpdateRunInput): Promise<ShownRun | Problem> {
  const refused = refusal(actor, "run.update");
  if (refused) return refused;
  const fault = await inTransaction(database(), async (transaction) => {
    const run = await lockRunInGroup(transaction, actor, runId);
    if (isProblem(run)) return run;
    const version = await findCurrentVersion(transaction, run);
    if (input.positions && version && input.positions.length !== version.sites) {
      return invalidAt("positions", `gives ${input.positions.length} positions, but the run has ${version.sites} sites`);
    }
    const change = { ...input, ...(input.campaign === "" && { campaign: null }), updatedAt: new Date() };
    await transaction.update(runs).set(change).where(and(eq(runs.id, runId), eq(runs.groupId, actor.groupId)));
    if (input.positions !== undefined) await readMisplaced(transaction, actor, runId);
    return null;
  });
  return fault ?? getRunInGroup(actor, runId);
}

async function readMisplaced(transaction: Transaction, actor: Actor, runId: string): Promise<void> {
  const refused = await transaction.select().from(archives).where(and(eq(archives.runId, runId), eq(archives.groupId, actor.groupId), eq(archives.state, "refused")));
  const misplaced = refused.filter(({ problem }) => problem?.errors.some(({ where }) => where === "positions"));
  if (misplaced.length === 0) return;
  await transaction.update(archives).set({ state: "waiting", problem: null }).where(inArray(archives.id, misplaced.map(({ id }) => id)));
  await requestReading(transaction, actor, runId);
}
