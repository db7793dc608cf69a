import type { FitQuality, FrontComparison } from "@/lib/science/front/front-result";

/** Returns power law minus linear; positive favours the straight line. Null without both fits, or without an AICc. */
export function compareFits(linear: FitQuality | null, powerLaw: FitQuality | null): FrontComparison {
  if (linear === null || powerLaw === null) return { deltaAicc: null, deltaBic: null };
  const deltaAicc = linear.aicc === null || powerLaw.aicc === null ? null : powerLaw.aicc - linear.aicc;
  return { deltaAicc, deltaBic: powerLaw.bic - linear.bic };
}
