import "server-only";
import type { Actor } from "@/lib/accounts/policy";
import { findStudyResults, type StudyRow } from "./find-study";
import { showStudyHead } from "./show-study";

/** Returns a study with its result, null until it is done. */
export async function getStudy(actor: Actor, row: StudyRow) {
  return { ...showStudyHead(row), result: (await findStudyResults(actor, [row.study.id])).get(row.study.id) ?? null };
}
