import type { JobAnswer } from "@/components/data/api-types";
import type { NullFrontResult } from "@/lib/science/studies/null-front-result";
import type { SelfTestResult } from "@/lib/science/studies/self-test-result";
import type { SweepResult } from "@/lib/science/studies/sweep-result";

export type StudyKindName = "sweep" | "null-front" | "self-test";

/** Where one kind of study of an analysis stands. */
export interface StudyView<Result> {
  /** The latest study of the kind, whatever its state. */
  latest: { id: string; job: Pick<JobAnswer, "id" | "state" | "error"> } | null;
  /** The latest one with a result. */
  done: { id: string; result: Result } | null;
}

export interface StudyViews {
  sweep: StudyView<SweepResult>;
  nullFront: StudyView<NullFrontResult>;
  selfTest: StudyView<SelfTestResult>;
}
