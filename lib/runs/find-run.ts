import "server-only";
import { and, eq, inArray, sql } from "drizzle-orm";
import { database } from "@/db/connection";
import { jobs } from "@/db/schema/jobs";
import { runVersions } from "@/db/schema/run-versions";
import { runs } from "@/db/schema/runs";
import type { Executor, Transaction } from "@/db/transaction";
import type { Actor } from "@/lib/accounts/policy";
import { isProblem, problem, type Problem } from "@/lib/problem";

export type RunRow = typeof runs.$inferSelect;
export type RunVersionRow = typeof runVersions.$inferSelect;

/** Returns a run of the member's group, or the Problem that there is none (also for another group's run). */
export async function findRunInGroup(executor: Executor, actor: Pick<Actor, "groupId">, runId: string): Promise<RunRow | Problem> {
  const [row] = await executor.select().from(runs).where(and(eq(runs.id, runId), eq(runs.groupId, actor.groupId)));
  return row ?? absent();
}

function absent(): Problem {
  return problem("not-found", "There is no such run.");
}

/** The same, and keeps the row locked to the end of the transaction. */
export async function lockRunInGroup(transaction: Transaction, actor: Pick<Actor, "groupId">, runId: string): Promise<RunRow | Problem> {
  const [row] = await transaction.select().from(runs).where(and(eq(runs.id, runId), eq(runs.groupId, actor.groupId))).for("update");
  return row ?? absent();
}

/** For `serve`: the Problem that a path's run is not there for this member, before anything sent with the call is looked at. */
export async function absentRun({ actor, params }: { actor: Pick<Actor, "groupId">; params: { runId: string } }): Promise<Problem | null> {
  const run = await findRunInGroup(database(), actor, params.runId);
  return isProblem(run) ? run : null;
}

/** Returns a run's current version, or null before the first archive has been read. */
export async function findCurrentVersion(executor: Executor, run: Pick<RunRow, "id" | "currentVersion">): Promise<RunVersionRow | null> {
  const [row] = await executor.select().from(runVersions).where(and(eq(runVersions.runId, run.id), eq(runVersions.number, run.currentVersion)));
  return row ?? null;
}

/** SQL value: the id of the run's latest job of any kind, or null. */
export function latestJobId() {
  return sql<string | null>`(select ${jobs.id} from ${jobs} where ${and(eq(jobs.groupId, runs.groupId), eq(jobs.runId, runs.id))} order by ${jobs.createdAt} desc limit 1)`;
}

/** SQL condition: the run is being read, or waits to be. */
export function ingestUnderWay() {
  return sql<number>`exists (select 1 from ${jobs} where ${and(
    eq(jobs.groupId, runs.groupId),
    eq(jobs.runId, runs.id),
    eq(jobs.kind, "ingest"),
    inArray(jobs.state, ["queued", "running"]),
  )})`;
}
