import "server-only";
import { database } from "@/db/connection";
import { refusal, type Actor } from "@/lib/accounts/policy";
import { isProblem, type Problem } from "@/lib/problem";
import { findCurrentVersion, findRunInGroup } from "./find-run";

export interface ShownBrightness {
  version: number;
  siteNames: string[];
  times_us: number[];
  /** `[k][site]` */
  brightness: number[][];
}

/** Returns the mean count of every site at every time over the kept shots. */
export async function getBrightness(actor: Actor, runId: string): Promise<ShownBrightness | Problem> {
  const refused = refusal(actor, "run.read");
  if (refused) return refused;
  const run = await findRunInGroup(database(), actor, runId);
  if (isProblem(run)) return run;
  const version = await findCurrentVersion(database(), run);
  return { version: version?.number ?? 0, siteNames: version?.siteNames ?? [], times_us: version?.timesUs ?? [], brightness: version?.brightness ?? [] };
}
