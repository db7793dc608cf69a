import type { FrontPoint } from "@/lib/science/front/front-result";
import type { FrontRule } from "@/lib/science/front/front-rule";

const NOTABLE_SHARE = 0.05;

/** Returns what to keep in mind about the whole front, in sentences; empty when nothing stands out. */
export function frontWarnings(
  points: FrontPoint[],
  rule: FrontRule,
  replicateCount: number,
  replicatesFitted: number | null,
): string[] {
  const warnings: string[] = [];
  const withWarning = (code: FrontPoint["warnings"][number]) =>
    points.filter((point) => point.warnings.includes(code)).length;
  const atEdge = withWarning("maximum-at-window-edge");
  if (atEdge > 0) {
    warnings.push(
      `${traces(atEdge, points.length)} the largest signal at the edge of the window: their maximum may lie outside, and the level with it.`,
    );
  }
  const inNoise = withWarning("level-in-noise");
  if (inNoise > 0) {
    const remedy =
      rule.method === "first" ? " The method “first” can fire on noise there; “isotonic” is more robust." : "";
    warnings.push(`${traces(inNoise, points.length)} a level below two standard errors at the crossing.${remedy}`);
  }
  const highLevel = withWarning("level-above-0.2");
  if (highLevel > 0) {
    warnings.push(
      `${traces(highLevel, points.length)} a level above 0.2 on a maximum of under 15 standard errors: the noisy maximum biases the level, and γ below 1.`,
    );
  }
  const failing = points.filter((point) => point.fitted && (point.failedShare ?? 0) > NOTABLE_SHARE).length;
  if (failing > 0)
    warnings.push(`${traces(failing, points.length)} more than 5\u202f% of the replicates without a crossing.`);
  if (replicatesFitted !== null && replicatesFitted < (1 - NOTABLE_SHARE) * replicateCount) {
    warnings.push(
      `Only ${replicatesFitted} of ${replicateCount} replicates carry a fit; the intervals rest on those alone.`,
    );
  }
  return warnings;
}

function traces(count: number, all: number): string {
  return `${count} of ${all} traces ${count === 1 ? "has" : "have"}`;
}
