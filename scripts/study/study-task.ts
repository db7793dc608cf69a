import { CORRELATOR_CELLS, correlatorCoverage } from "@/scripts/study/correlator-coverage";
import { FRONT_CELLS } from "@/scripts/study/front-cells";
import { frontCoverage } from "@/scripts/study/front-coverage";
import { fittedLawStudy, fittedLawTable } from "@/scripts/study/fitted-laws";
import { thresholdFreeStudy, thresholdFreeTable } from "@/scripts/study/threshold-free";

/** A piece of work for one thread. */
export type StudyTask =
  | { study: "correlators" | "fronts"; row: number; first: number; count: number; seed: number }
  | { study: "threshold-free" | "fitted-laws"; repeats: number; seed: number };

/** Rows of one seed are drawn under seeds of their own. */
const SEEDS_A_ROW = 1000;

/** Returns a tally, or a table that is already text. */
export function runStudyTask(task: StudyTask) {
  switch (task.study) {
    case "correlators":
      return correlatorCoverage(CORRELATOR_CELLS[task.row], task.row, task.seed, task.first, task.count);
    case "fronts":
      return frontCoverage(FRONT_CELLS[task.row], task.seed * SEEDS_A_ROW + task.row, task.first, task.count);
    case "threshold-free":
      return thresholdFreeTable(thresholdFreeStudy(task.seed, task.repeats));
    case "fitted-laws":
      return fittedLawTable(fittedLawStudy(task.seed, task.repeats));
  }
}
