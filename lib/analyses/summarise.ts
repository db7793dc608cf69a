import type { AnalysisSummary } from "@/db/schema/analyses";
import type { TimeResult } from "@/lib/science/correlators/analyse-time";
import { isNoFit, type FrontResult, type Parameter } from "@/lib/science/front/front-result";

/** Returns the key figures of a finished analysis for tables and strips. */
export function summarise(front: FrontResult, results: TimeResult[]): AnalysisSummary {
  const { linear, powerLaw } = front;
  const figures = ({ value, error, low, high }: Parameter) => ({ value, error, low, high });
  return {
    verdict: front.verdict,
    verdictSentence: front.verdictSentence,
    beta: isNoFit(powerLaw) ? null : { ...figures(powerLaw.beta), unbounded: powerLaw.beta.unbounded },
    gamma: isNoFit(powerLaw) ? null : figures(powerLaw.gamma),
    v_sites_per_ms: isNoFit(linear) ? null : { ...figures(linear.v_sites_per_ms), unbounded: linear.v_sites_per_ms.unbounded },
    resolvedPoints: front.points.filter(({ status }) => status === "resolved").length,
    points: front.points.length,
    warnings: [...oneShotWarnings(results), ...front.warnings],
  };
}

function oneShotWarnings(results: TimeResult[]): string[] {
  const single = results.filter(({ shots }) => shots < 2).length;
  return single > 0 ? [`${single} of ${results.length} times have a single shot: no error bar is possible there.`] : [];
}
