import "server-only";
import type { StudyKind, StudyParameters } from "@/db/schema/front-studies";
import type { Actor } from "@/lib/accounts/policy";
import { isProblem, type Problem } from "@/lib/problem";
import type { NullFrontResult } from "@/lib/science/studies/null-front-result";
import type { SelfTestResult } from "@/lib/science/studies/self-test-result";
import type { SweepResult } from "@/lib/science/studies/sweep-result";
import { findAnalysisStudies, findStudyResults, type StudyRow } from "./find-study";
import { showStudyHead } from "./show-study";

const MOST = 100;

interface KindOfStudy<Result> {
  /** The latest study of the kind, whatever its state. */
  latest: ReturnType<typeof showStudyHead> | null;
  /** The latest one with a result. */
  done: { id: string; parameters: StudyParameters; result: Result } | null;
}

export interface LatestStudies {
  sweep: KindOfStudy<SweepResult>;
  nullFront: KindOfStudy<NullFrontResult>;
  selfTest: KindOfStudy<SelfTestResult>;
}

/** Returns where each kind of study of an analysis stands, with the latest results. */
export async function latestStudies(actor: Actor, analysisId: string): Promise<LatestStudies | Problem> {
  const rows = await findAnalysisStudies(actor, analysisId, MOST);
  if (isProblem(rows)) return rows;
  const done = (kind: StudyKind) => rows.find(({ study, job }) => study.kind === kind && job.state === "done");
  const finished = [done("sweep"), done("null-front"), done("self-test")].flatMap((row) => (row ? [row.study.id] : []));
  const results = await findStudyResults(actor, finished);
  const ofKind = <Result>(kind: StudyKind): KindOfStudy<Result> => {
    const latest = rows.find(({ study }) => study.kind === kind);
    return { latest: latest ? showStudyHead(latest) : null, done: withResult<Result>(done(kind), results) };
  };
  return { sweep: ofKind("sweep"), nullFront: ofKind("null-front"), selfTest: ofKind("self-test") };
}

/** A result has the shape of its study's kind, which its job alone writes. */
function withResult<Result>(row: StudyRow | undefined, results: Map<string, Record<string, unknown>>): KindOfStudy<Result>["done"] {
  const result = row && results.get(row.study.id);
  return result ? { id: row.study.id, parameters: row.study.parameters, result: result as Result } : null;
}
