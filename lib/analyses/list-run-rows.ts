import "server-only";
import { and, desc, eq, inArray, isNotNull } from "drizzle-orm";
import { database } from "@/db/connection";
import { analyses, type AnalysisSummary } from "@/db/schema/analyses";
import type { Actor } from "@/lib/accounts/policy";
import { isProblem, type Problem } from "@/lib/problem";
import { listRuns } from "@/lib/runs/list-runs";
import type { ShownRun } from "@/lib/runs/show-run";
import { thumbnailOf, type Thumbnail } from "./thumbnail";

const MOST_ROWS = 200;

/** A run as the runs table shows it, with its latest finished analysis. */
export interface RunRow {
  id: string;
  title: string;
  campaign: string | null;
  createdAt: string;
  createdBy: string;
  status: ShownRun["status"];
  sites: number | null;
  times: number;
  shotsKept: number;
  shotsSetAside: number;
  model: ShownRun["model"];
  alpha: number | null;
  analysis: { number: number; verdict: string; beta: AnalysisSummary["beta"]; thumbnail: Thumbnail | null } | null;
}

/** Returns the newest runs of the member's group, each with its latest finished analysis and a thumbnail of its map. */
export async function listRunRows(actor: Actor): Promise<{ rows: RunRow[]; more: boolean } | Problem> {
  const page = await listRuns(actor, { limit: MOST_ROWS });
  if (isProblem(page)) return page;
  const latest = await latestAnalyses(actor, page.items.map(({ id }) => id));
  const rows = await Promise.all(page.items.map((run) => runRow(run, latest.get(run.id))));
  return { rows, more: page.nextCursor !== null };
}

type AnalysisRow = typeof analyses.$inferSelect;

async function latestAnalyses(actor: Actor, runIds: string[]): Promise<Map<string, AnalysisRow>> {
  const latest = new Map<string, AnalysisRow>();
  if (runIds.length === 0) return latest;
  const rows = await database()
    .select()
    .from(analyses)
    .where(and(eq(analyses.groupId, actor.groupId), inArray(analyses.runId, runIds), isNotNull(analyses.summary)))
    .orderBy(desc(analyses.number));
  for (const row of rows) if (!latest.has(row.runId)) latest.set(row.runId, row);
  return latest;
}

async function runRow(run: ShownRun, analysis: AnalysisRow | undefined): Promise<RunRow> {
  return {
    id: run.id,
    title: run.title,
    campaign: run.campaign,
    createdAt: run.createdAt,
    createdBy: run.createdBy,
    status: run.status,
    sites: run.sites || null,
    times: run.times_us.length,
    shotsKept: sum(run.shotsPerTime),
    shotsSetAside: sum(Object.values(run.shotsSetAside)),
    model: run.model,
    alpha: run.alpha,
    analysis: analysis?.summary
      ? { number: analysis.number, verdict: analysis.summary.verdict, beta: analysis.summary.beta, thumbnail: await thumbnailOf(database(), analysis.id) }
      : null,
  };
}

function sum(values: number[]): number {
  return values.reduce((total, value) => total + value, 0);
}
