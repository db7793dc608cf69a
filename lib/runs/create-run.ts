import "server-only";
import { database } from "@/db/connection";
import { newId } from "@/db/new-id";
import { runs } from "@/db/schema/runs";
import { refusal, type Actor } from "@/lib/accounts/policy";
import type { Problem } from "@/lib/problem";
import { getRunInGroup } from "./get-run";
import type { CreateRunInput } from "./run-schemas";
import type { ShownRun } from "./show-run";

/** Makes an empty run of the member's group. */
export async function createRun(actor: Actor, input: CreateRunInput): Promise<ShownRun | Problem> {
  const refused = refusal(actor, "run.create");
  if (refused) return refused;
  const id = newId();
  const now = new Date();
  await database()
    .insert(runs)
    .values({
      id,
      groupId: actor.groupId,
      title: input.title,
      notes: input.notes,
      brightIs: input.brightIs,
      model: input.model,
      positions: input.positions ?? null,
      jMaxHz: input.jMaxHz ?? null,
      alpha: input.alpha ?? null,
      campaign: input.campaign || null,
      currentVersion: 0,
      createdBy: actor.userId,
      createdAt: now,
      updatedAt: now,
    });
  return getRunInGroup(actor, id);
}
