import "server-only";
import { and, desc, eq } from "drizzle-orm";
import { database } from "@/db/connection";
import { detections } from "@/db/schema/detections";
import { runs } from "@/db/schema/runs";
import { users } from "@/db/schema/users";
import { refusal, type Actor } from "@/lib/accounts/policy";
import { afterCursor } from "@/lib/http/after-cursor";
import { pageOf, type Cursor, type Page } from "@/lib/http/page-query";
import { isProblem, problem, type Problem } from "@/lib/problem";
import { findRunInGroup } from "@/lib/runs/find-run";
import { showDetection, type ShownDetection } from "./show-detection";

/** Returns the detections of a run, newest first. */
export async function listDetections(actor: Actor, runId: string, page: { cursor?: Cursor; limit: number }): Promise<Page<ShownDetection> | Problem> {
  const refused = refusal(actor, "detection.read");
  if (refused) return refused;
  const run = await findRunInGroup(database(), actor, runId);
  if (isProblem(run)) return run;
  const rows = await database()
    .select({ detection: detections, createdByName: users.name })
    .from(detections)
    .innerJoin(users, eq(users.id, detections.createdBy))
    .where(and(eq(detections.groupId, actor.groupId), eq(detections.runId, runId), afterCursor(detections, page.cursor)))
    .orderBy(desc(detections.createdAt), desc(detections.id))
    .limit(page.limit + 1);
  const flat = rows.map(({ detection, createdByName }) => ({ ...detection, createdByName }));
  return pageOf(flat, page.limit, ({ createdByName, ...row }) => showDetection(row, createdByName, run.currentVersion));
}

/** Returns one detection of the member's group. */
export async function getDetection(actor: Actor, detectionId: string): Promise<ShownDetection | Problem> {
  const refused = refusal(actor, "detection.read");
  if (refused) return refused;
  const [row] = await database()
    .select({ detection: detections, createdByName: users.name, currentVersion: runs.currentVersion })
    .from(detections)
    .innerJoin(users, eq(users.id, detections.createdBy))
    .innerJoin(runs, eq(runs.id, detections.runId))
    .where(and(eq(detections.id, detectionId), eq(detections.groupId, actor.groupId)));
  return row ? showDetection(row.detection, row.createdByName, row.currentVersion) : problem("not-found", "There is no such detection.");
}
