import { planTraces } from "@/lib/analyses/plan-analysis";
import { isProblem, type Problem } from "@/lib/problem";
import type { SimulatedAnalysis } from "@/lib/science/studies/simulated-run";
import { knownReadoutErrors, type StudyInputs } from "./load-study";

/** Returns how the repeats of a study are read and analysed: as the analysis was. Unknown readout errors are taken as none. */
export function simulatedAnalysis({ analysis, version, sites }: StudyInputs, seed: number): SimulatedAnalysis | Problem {
  const { parameters, provenance } = analysis;
  const traces = planTraces(parameters.traces, provenance.positions);
  if (isProblem(traces)) return traces;
  const { throughOrigin, powerLawIn, covariance, ...rule } = parameters.front;
  return {
    times_us: Float64Array.from(version.timesUs),
    shotsPerTime: Float64Array.from(version.shotsPerTime),
    readoutErrors: knownReadoutErrors(sites),
    readoutCorrected: parameters.readoutCorrection,
    brightIs: provenance.brightIs,
    estimator: parameters.estimator,
    interval: parameters.bootstrap.interval,
    traces,
    rule,
    options: { throughOrigin, powerLawIn, covariance },
    replicates: parameters.bootstrap.replicates,
    seed,
  };
}

/** Returns what to keep in mind where an analysis reads spins in another way than its studies do. */
export function readingNotes({ analysis }: StudyInputs): string[] {
  return analysis.parameters.reading === "threshold" ? [] : ["The analysis reads spins without thresholds; this study reads them with the thresholds of its detection."];
}
